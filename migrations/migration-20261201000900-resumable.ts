import { Migration } from '@mikro-orm/migrations';

/**
 * Uploads that go on after a broken connection: how long the file will be, and what its sender says of it. How far it has come
 * is size_bytes, as for every upload. Such a one may rest for a day before it counts as given up; the others for a quarter hour.
 */
export class Migration20261201000900Resumable extends Migration {
  override up(): void {
    this.addSql(`alter table upload add column announced_bytes bigint check (announced_bytes > 0),
      add column tus_metadata text check (length(tus_metadata) <= 8192)`);
    this.addSql(
      endAbandonedUploads(`case when announced_bytes is null then interval '15 minutes' else interval '24 hours' end`),
    );
  }

  override down(): void {
    this.addSql(endAbandonedUploads(`interval '15 minutes'`));
    this.addSql(`alter table upload drop column tus_metadata, drop column announced_bytes`);
  }
}

/** Keeps its owner and grants: it replaces. */
const endAbandonedUploads = (rest: string): string => `
  create or replace function end_abandoned_uploads() returns table (upload_id uuid) language sql volatile security definer
    set search_path = public, pg_temp as $$
    with ended as (
      update upload set status = 'failed', finished_at = now(),
        problems = '[{"code":"half-finished","severity":"error","message":"The upload stopped before the whole file had arrived. Nothing of it is kept; send the file again.","count":1}]'
      where status = 'receiving' and last_chunk_at < now() - ${rest} returning id),
    gone as (delete from upload_chunk c using ended e where c.upload_id = e.id)
    select id from ended $$`;
