import { Migration } from '@mikro-orm/migrations';

/** Table options for tables whose rows are rewritten whole: with the defaults, rewrites of a year grew the table 25-fold. */
const REWRITTEN = `with (autovacuum_vacuum_scale_factor = 0.02, toast.autovacuum_vacuum_scale_factor = 0.02)`;

/** Uploads as received, in chunks; the layers they become; the day blocks derived from the layers. */
export class Migration20261201000300Samples extends Migration {
  override up(): void {
    this.addSql(`
      create table upload (
        id uuid primary key default gen_random_uuid(),
        organization_id uuid not null,
        plant_id uuid not null,
        upload_seq integer,
        filename text not null,
        files jsonb not null default '[]',
        size_bytes bigint not null default 0,
        sha256 text,
        status text not null default 'receiving'
          check (status in ('receiving', 'received', 'needs-mapping', 'importing', 'analysing', 'done', 'failed')),
        progress real not null default 0,
        rows_read bigint not null default 0,
        samples_stored bigint not null default 0,
        data_from timestamptz,
        data_to timestamptz,
        problems jsonb not null default '[]',
        preview jsonb,
        confirmed jsonb,
        -- true once its layers count: only then do derived blocks hold its values
        applied boolean not null default false,
        created_by uuid references app_user on delete set null,
        created_by_token uuid references api_token on delete set null,
        created_at timestamptz not null default now(),
        last_chunk_at timestamptz not null default now(),
        finished_at timestamptz,
        removed_at timestamptz,
        unique (plant_id, upload_seq),
        unique (id, organization_id),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`create index upload_plant_created on upload (plant_id, created_at desc, id)`);
    this.addSql(`create index upload_receiving on upload (last_chunk_at) where status = 'receiving'`);
    this.addSql(`call make_tenant_table('upload', 'select, insert, update', 'select, update')`);

    // 1 MiB of the file a row, each compressed by itself (gzip), so that a reader can start anywhere.
    this.addSql(`
      create table upload_chunk (
        organization_id uuid not null,
        upload_id uuid not null,
        file_index smallint not null,
        seq integer not null,
        raw_bytes integer not null,
        data bytea not null,
        primary key (upload_id, file_index, seq),
        foreign key (upload_id, organization_id) references upload (id, organization_id) on delete cascade
      )`);
    this.addSql(`alter table upload_chunk alter column data set storage external`);
    this.addSql(`call make_tenant_table('upload_chunk', 'select, insert, delete', 'select, delete')`);

    this.addSql(`
      create table sample_layer (
        organization_id uuid not null,
        plant_id uuid not null,
        day date not null,
        point_id uuid not null,
        upload_seq integer not null,
        step smallint not null,
        first_slot smallint not null default 0,
        v real[] not null,
        primary key (plant_id, day, point_id, upload_seq),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      ) ${REWRITTEN}`);
    this.addSql(`alter table sample_layer alter column v set compression lz4`);
    this.addSql(`create index sample_layer_upload on sample_layer (plant_id, upload_seq)`);
    this.addSql(`call make_tenant_table('sample_layer', 'select', 'select, insert, update, delete')`);

    this.addSql(`
      create table sample_block (
        organization_id uuid not null,
        plant_id uuid not null,
        day date not null,
        point_id uuid not null,
        step smallint not null,
        first_slot smallint not null default 0,
        v real[] not null,
        lo real[] not null,
        mean real[] not null,
        hi real[] not null,
        primary key (plant_id, day, point_id),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      ) ${REWRITTEN}`);
    for (const column of ['v', 'lo', 'mean', 'hi'])
      this.addSql(`alter table sample_block alter column ${column} set compression lz4`);
    // A band is 24 values: kept in the row, so that a year's chart never opens the blocks.
    for (const column of ['lo', 'mean', 'hi'])
      this.addSql(`alter table sample_block alter column ${column} set storage main`);
    this.addSql(`call make_tenant_table('sample_block', 'select', 'select, insert, update, delete')`);

    // Days whose results are older than their samples, settings or kernel. \`mark\` grows with each reason, so that a slice
    // which read before the latest reason cannot clear it.
    this.addSql(`create sequence stale_day_mark`);
    this.addSql(`
      create table stale_day (
        organization_id uuid not null,
        plant_id uuid not null,
        day date not null,
        mark bigint not null default nextval('stale_day_mark'),
        primary key (plant_id, day),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`grant usage on sequence stale_day_mark to slackwater_app, slackwater_worker`);
    this.addSql(`call make_tenant_table('stale_day', 'select, insert, update', 'select, insert, update, delete')`);

    this.addSql(`
      create view interval_sample with (security_invoker = true) as
      select b.organization_id, b.plant_id, b.day, p.role, p.unit_index, p.ordinal,
             (b.day::timestamp at time zone 'UTC') + (b.first_slot + s.i - 1) * b.step * interval '1 minute' as "timestamp",
             nullif(s.value, 'NaN'::real) as value
      from sample_block b join point p on p.id = b.point_id and p.plant_id = b.plant_id
      cross join lateral unnest(b.v) with ordinality as s(value, i)`);
    this.addSql(`
      create function interval_sample_between(plant uuid, from_instant timestamptz, to_instant timestamptz)
      returns setof interval_sample language sql stable as $$
        select * from interval_sample i
        where i.plant_id = plant and i.day between (from_instant at time zone 'UTC')::date and (to_instant at time zone 'UTC')::date
          and i."timestamp" >= from_instant and i."timestamp" < to_instant $$`);
    this.addSql(`grant select on interval_sample to slackwater_app`);

    this.addSql(`
      create function end_abandoned_uploads() returns table (upload_id uuid) language sql volatile security definer
        set search_path = public, pg_temp as $$
        with ended as (
          update upload set status = 'failed', finished_at = now(),
            problems = '[{"code":"half-finished","severity":"error","message":"The upload stopped before the whole file had arrived. Nothing of it is kept; send the file again.","count":1}]'
          where status = 'receiving' and last_chunk_at < now() - interval '15 minutes' returning id),
        gone as (delete from upload_chunk c using ended e where c.upload_id = e.id)
        select id from ended $$`);
    this.addSql(`revoke all on function end_abandoned_uploads() from public`);
    this.addSql(`grant execute on function end_abandoned_uploads() to slackwater_worker`);
  }

  override down(): void {
    this.addSql(`drop function end_abandoned_uploads`);
    this.addSql(`drop function interval_sample_between`);
    this.addSql(`drop view interval_sample`);
    for (const name of ['stale_day', 'sample_block', 'sample_layer', 'upload_chunk', 'upload'])
      this.addSql(`drop table ${name}`);
    this.addSql(`drop sequence stale_day_mark`);
  }
}
