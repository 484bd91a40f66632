import { Migration } from '@mikro-orm/migrations';

/** Plants, their settings revision by revision, their points, and the mappings remembered by heading. */
export class Migration20261201000200Plants extends Migration {
  override up(): void {
    this.addSql(`
      create table plant (
        id uuid primary key default gen_random_uuid(),
        organization_id uuid not null references organization on delete cascade,
        name text not null check (length(name) between 1 and 120),
        time_zone text not null,
        arrangement text not null check (arrangement in ('primary-secondary', 'variable-primary', 'building-bridge')),
        step_minutes smallint not null check (step_minutes > 0 and 1440 % step_minutes = 0),
        settings_revision integer not null default 1,
        -- counts every change of stored results: the weak ETag of everything derived
        results_revision bigint not null default 0,
        next_upload_seq integer not null default 1,
        data_from timestamptz,
        data_through timestamptz,
        created_at timestamptz not null default now(),
        deleted_at timestamptz,
        unique (id, organization_id)
      )`);
    this.addSql(`create index plant_organization_id on plant (organization_id, name)`);
    this.addSql(`call make_tenant_table('plant', 'select, insert, update, delete', 'select, update')`);

    this.addSql(`
      create table plant_settings (
        organization_id uuid not null,
        plant_id uuid not null,
        revision integer not null,
        settings jsonb not null,
        created_by uuid references app_user on delete set null,
        created_at timestamptz not null default now(),
        primary key (plant_id, revision),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`call make_tenant_table('plant_settings', 'select, insert', 'select')`);

    // One role may have several feeders (two flow meters that add up): \`ordinal\` tells them apart.
    this.addSql(`
      create table point (
        id uuid primary key default gen_random_uuid(),
        organization_id uuid not null,
        plant_id uuid not null,
        role text not null,
        unit_index smallint not null default 0,
        ordinal smallint not null default 0,
        source_name text not null,
        created_at timestamptz not null default now(),
        unique (plant_id, role, unit_index, ordinal),
        unique (id, plant_id),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`call make_tenant_table('point', 'select', 'select, insert, update')`);

    this.addSql(`
      create table mapping (
        organization_id uuid not null,
        plant_id uuid not null,
        fingerprint text not null,
        confirmed jsonb not null,
        created_by uuid references app_user on delete set null,
        created_at timestamptz not null default now(),
        primary key (plant_id, fingerprint),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`call make_tenant_table('mapping', 'select, insert, update, delete', 'select, insert, update')`);

    this.addSql(
      `alter table api_token add foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade`,
    );
  }

  override down(): void {
    this.addSql(`alter table api_token drop constraint api_token_plant_id_organization_id_fkey`);
    for (const name of ['mapping', 'point', 'plant_settings', 'plant']) this.addSql(`drop table ${name}`);
  }
}
