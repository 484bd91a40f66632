import { Migration } from '@mikro-orm/migrations';

/** Channels that tell how well an interval's measurements fit together. Blocks of before hold none: an empty array reads as unknown. */
const FIT_CHANNELS = ['chi_square', 'redundancy', 'at_odds'];
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
/** Words of `at_odds`, by code. */
const SENSORS = [
  'primarySupplyTemp',
  'primaryReturnTemp',
  'secondarySupplyTemp',
  'secondaryReturnTemp',
  'bypassTemp',
  'primaryFlow',
  'secondaryFlow',
  'bypassFlow',
  'ratedFlow',
];

/** A calibration a plant and calendar month, reference readings that enter it, and what each interval says of its own fit. */
export class Migration20261201000700Calibration extends Migration {
  override up(): void {
    // Nothing wrote calibrations before this.
    this.addSql(`delete from calibration`);
    this.addSql(`
      alter table calibration
        drop column offsets, drop column gains, drop column covariance,
        alter column valid_from type date using (valid_from at time zone 'UTC')::date,
        alter column valid_to type date using (valid_to at time zone 'UTC')::date,
        add column settings_revision integer not null,
        add column detail jsonb not null,
        add unique (plant_id, valid_from)`);
    // A month that is fitted again gets a new number: a result that names an old one is seen to be older.
    this.addSql(`create sequence calibration_id as integer`);
    this.addSql(`grant usage on sequence calibration_id to slackwater_worker`);

    this.addSql(`
      alter table result_block ${FIT_CHANNELS.map((channel) => `add column ${channel} real[] not null default '{}'`).join(', ')}`);
    for (const channel of FIT_CHANNELS)
      this.addSql(`alter table result_block alter column ${channel} set compression lz4`);

    this.addSql(`
      create table spot_check (
        id uuid primary key default gen_random_uuid(),
        organization_id uuid not null,
        plant_id uuid not null,
        at timestamptz not null,
        role text not null,
        unit_index smallint not null default 0,
        reading double precision not null,
        -- what the plant's own sensor showed beside it; empty: what the record holds at that time
        shown double precision,
        -- the latter, as the last analysis found it: when it changes, what rested on it is worked out again
        recorded double precision,
        sigma double precision not null check (sigma > 0),
        instrument text not null default '',
        note text not null default '',
        created_by uuid references app_user on delete set null,
        created_at timestamptz not null default now(),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`create index spot_check_plant_at on spot_check (plant_id, at desc, id)`);
    this.addSql(`call make_tenant_table('spot_check', 'select, insert, delete', 'select, update')`);

    this.makeView(FIT_CHANNELS);
  }

  /** The rows of result_block for people with psql. */
  private makeView(more: readonly string[]): void {
    const channels = [...CHANNELS, ...more];
    this.addSql(`drop function if exists interval_result_between`);
    this.addSql(`drop view if exists interval_result`);
    this.addSql(`
      create view interval_result with (security_invoker = true) as
      select b.organization_id, b.plant_id, b.day, b.settings_revision, b.calibration_id, b.kernel_version,
             (b.day::timestamp at time zone 'UTC') + (s.i - 1) * b.step * interval '1 minute' as "timestamp",
             (array['unknown', 'forward', 'reverse', 'still'])[s.direction::int + 1] as direction,
             ${CHANNELS.filter((channel) => !['direction', 'state', 'reason'].includes(channel))
               .map((channel) => `nullif(s.${channel}, 'NaN'::real) as ${channel}`)
               .join(', ')},
             (array['unknown', 'running', 'starting', 'coasting', 'off'])[s.state::int + 1] as state
             ${
               more.length === 0
                 ? ''
                 : `, nullif(s.chi_square, 'NaN'::real) as chi_square, nullif(s.redundancy, 'NaN'::real) as redundancy,
             (array[${SENSORS.map((sensor) => `'${sensor}'`).join(', ')}])[nullif(s.at_odds, 'NaN'::real)::int + 1] as at_odds`
             }
      from result_block b cross join lateral
        unnest(${channels.map((channel) => `b.${channel}`).join(', ')}) with ordinality as s(${channels.join(', ')}, i)`);
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
    this.addSql(`drop table spot_check`);
    this.addSql(`alter table result_block ${FIT_CHANNELS.map((channel) => `drop column ${channel}`).join(', ')}`);
    this.makeView([]);
    this.addSql(`delete from calibration`);
    this.addSql(`
      alter table calibration
        drop column settings_revision, drop column detail, drop constraint calibration_plant_id_valid_from_key,
        alter column valid_from type timestamptz using valid_from::timestamp at time zone 'UTC',
        alter column valid_to type timestamptz using valid_to::timestamp at time zone 'UTC',
        add column offsets jsonb not null, add column gains jsonb not null, add column covariance jsonb not null`);
    this.addSql(`drop sequence calibration_id`);
  }
}
