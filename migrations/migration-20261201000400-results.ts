import { Migration } from '@mikro-orm/migrations';

const REWRITTEN = `with (autovacuum_vacuum_scale_factor = 0.02, toast.autovacuum_vacuum_scale_factor = 0.02)`;
const CHANNELS = [
  'direction',
  'reverse_probability',
  'bypass_flow_gpm',
  'bypass_flow_lo_gpm',
  'bypass_flow_hi_gpm',
  'blended_supply_f',
  'blended_supply_lo_f',
  'blended_supply_hi_f',
  'primary_flow_gpm',
  'secondary_flow_gpm',
  'primary_supply_f',
  'primary_return_f',
  'secondary_return_f',
  'load_tons',
  'load_delta_t_f',
  'production_delta_t_f',
  'steady',
  'quality',
  'state',
  'reason',
];

/** Estimates a day a row, hours, local days, episodes, and the runs of analysis that made them. */
export class Migration20261201000400Results extends Migration {
  override up(): void {
    this.addSql(`
      create table analysis (
        id uuid primary key default gen_random_uuid(),
        organization_id uuid not null,
        plant_id uuid not null,
        upload_id uuid references upload on delete set null,
        status text not null default 'queued' check (status in ('queued', 'running', 'done', 'failed')),
        progress real not null default 0,
        day_from date,
        day_to date,
        days_total integer not null default 0,
        kernel_version text not null,
        settings_revision integer not null,
        failure text,
        created_by uuid references app_user on delete set null,
        created_at timestamptz not null default now(),
        finished_at timestamptz,
        unique (id, organization_id),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`create index analysis_plant on analysis (plant_id, created_at desc)`);
    this.addSql(`create index analysis_open on analysis (plant_id) where status in ('queued', 'running')`);
    this.addSql(`call make_tenant_table('analysis', 'select, insert, update', 'select, insert, update')`);

    this.addSql(`
      create table calibration (
        organization_id uuid not null,
        plant_id uuid not null,
        id integer not null,
        valid_from timestamptz not null,
        valid_to timestamptz not null,
        input_hash text not null,
        offsets jsonb not null,
        gains jsonb not null,
        covariance jsonb not null,
        kernel_version text not null,
        created_at timestamptz not null default now(),
        primary key (plant_id, id),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`call make_tenant_table('calibration', 'select', 'select, insert, update, delete')`);

    this.addSql(`
      create table result_block (
        organization_id uuid not null,
        plant_id uuid not null,
        day date not null,
        step smallint not null,
        settings_revision integer not null,
        calibration_id integer not null default 0,
        kernel_version text not null,
        input_hash text not null,
        ${CHANNELS.map((channel) => `${channel} real[] not null`).join(',\n        ')},
        primary key (plant_id, day),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      ) ${REWRITTEN}`);
    for (const channel of CHANNELS) this.addSql(`alter table result_block alter column ${channel} set compression lz4`);
    this.addSql(`call make_tenant_table('result_block', 'select', 'select, insert, update, delete')`);

    this.addSql(`
      create table hour (
        organization_id uuid not null,
        plant_id uuid not null,
        hour_start timestamptz not null,
        local_day date not null,
        low boolean not null,
        running_minutes real not null,
        load_tons double precision,
        delta_t_f double precision,
        expected_delta_t_f double precision,
        production_delta_t_f double precision,
        primary_flow_gpm double precision,
        secondary_flow_gpm double precision,
        bypass_flow_gpm double precision,
        primary_supply_f double precision,
        reverse_minutes real not null,
        forward_minutes real not null,
        still_minutes real not null,
        unknown_minutes real not null,
        reverse_flow_gpm double precision,
        reverse_flow_max_gpm double precision,
        blended_supply_f double precision,
        blended_supply_max_f double precision,
        excess_flow_gpm double precision,
        avoidable_flow_gpm double precision,
        cause text not null,
        cause_confidence real,
        excess_energy_kwh double precision,
        excess_cost double precision,
        stranded_tons double precision,
        units_running real,
        quality real,
        primary key (plant_id, hour_start),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`create index hour_plant_day on hour (plant_id, local_day)`);
    // One partial index a ranking: the top of a plant's year without sorting it.
    this.addSql(
      `create index hour_rank_excess on hour (plant_id, excess_flow_gpm desc nulls last, hour_start) where low`,
    );
    this.addSql(`create index hour_rank_cost on hour (plant_id, excess_cost desc nulls last, hour_start) where low`);
    this.addSql(`create index hour_rank_delta_t on hour (plant_id, delta_t_f asc nulls last, hour_start) where low`);
    this.addSql(`create index hour_rank_reverse on hour (plant_id, reverse_minutes desc, hour_start) where low`);
    this.addSql(`call make_tenant_table('hour', 'select', 'select, insert, update, delete')`);

    this.addSql(`
      create table plant_day (
        organization_id uuid not null,
        plant_id uuid not null,
        day date not null,
        reverse_minutes real not null,
        unknown_minutes real not null,
        running_minutes real not null,
        largest_reverse_flow_gpm double precision,
        warmest_supply_f double precision,
        low_hours integer not null,
        excess_cost double precision,
        excess_energy_kwh double precision,
        load_ton_hours double precision,
        coverage real,
        worst_hour timestamptz,
        primary key (plant_id, day),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`call make_tenant_table('plant_day', 'select', 'select, insert, update, delete')`);

    this.addSql(`
      create table episode (
        id uuid primary key default gen_random_uuid(),
        organization_id uuid not null,
        plant_id uuid not null,
        cause text not null,
        started_at timestamptz not null,
        ended_at timestamptz not null,
        hours integer not null,
        worst_hour timestamptz not null,
        largest_reverse_flow_gpm double precision,
        warmest_supply_f double precision,
        excess_energy_kwh double precision,
        excess_cost double precision,
        acknowledged_at timestamptz,
        acknowledged_by uuid references app_user on delete set null,
        note text,
        -- judged at the end of a statement: one that moves several episodes may pass through a clash
        unique (plant_id, cause, started_at) deferrable initially immediate,
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`create index episode_plant_started on episode (plant_id, started_at desc)`);
    this.addSql(`call make_tenant_table('episode', 'select, update', 'select, insert, update, delete')`);

    this.addSql(`
      create view interval_result with (security_invoker = true) as
      select b.organization_id, b.plant_id, b.day, b.settings_revision, b.calibration_id, b.kernel_version,
             (b.day::timestamp at time zone 'UTC') + (s.i - 1) * b.step * interval '1 minute' as "timestamp",
             (array['unknown', 'forward', 'reverse', 'still'])[s.direction::int + 1] as direction,
             ${CHANNELS.filter((channel) => !['direction', 'state', 'reason'].includes(channel))
               .map((channel) => `nullif(s.${channel}, 'NaN'::real) as ${channel}`)
               .join(', ')},
             (array['unknown', 'running', 'starting', 'coasting', 'off'])[s.state::int + 1] as state
      from result_block b cross join lateral
        unnest(${CHANNELS.map((channel) => `b.${channel}`).join(', ')}) with ordinality as s(${CHANNELS.join(', ')}, i)`);
    this.addSql(`
      create function interval_result_between(plant uuid, from_instant timestamptz, to_instant timestamptz)
      returns setof interval_result language sql stable as $$
        select * from interval_result i
        where i.plant_id = plant and i.day between (from_instant at time zone 'UTC')::date and (to_instant at time zone 'UTC')::date
          and i."timestamp" >= from_instant and i."timestamp" < to_instant $$`);
    this.addSql(`grant select on interval_result to slackwater_app`);
  }

  override down(): void {
    this.addSql(`drop function interval_result_between`);
    this.addSql(`drop view interval_result`);
    for (const name of ['episode', 'plant_day', 'hour', 'result_block', 'calibration', 'analysis'])
      this.addSql(`drop table ${name}`);
  }
}
