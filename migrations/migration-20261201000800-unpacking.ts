import { Migration } from '@mikro-orm/migrations';

/** The worker unpacks archives and workbooks into text files of the same upload; the same bytes are recognised by their hash. */
export class Migration20261201000800Unpacking extends Migration {
  override up(): void {
    this.addSql(`grant insert on upload_chunk to slackwater_worker`);
    this.addSql(`create index upload_sha256 on upload (plant_id, sha256) where sha256 is not null`);
  }

  override down(): void {
    this.addSql(`drop index upload_sha256`);
    this.addSql(`revoke insert on upload_chunk from slackwater_worker`);
  }
}
