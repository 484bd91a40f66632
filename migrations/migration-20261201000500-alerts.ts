import { Migration } from '@mikro-orm/migrations';

/** The daily alert: its rule, one run a plant and local day, one delivery a person; the workers' sign of life; the local mailbox. */
export class Migration20261201000500Alerts extends Migration {
  override up(): void {
    this.addSql(`
      create table alert_rule (
        organization_id uuid not null,
        plant_id uuid primary key,
        enabled boolean not null default true,
        min_reverse_minutes integer not null default 30 check (min_reverse_minutes between 1 and 1440),
        min_reverse_flow_gpm double precision not null default 0,
        send_at time not null default '06:30',
        updated_by uuid references app_user on delete set null,
        updated_at timestamptz not null default now(),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`call make_tenant_table('alert_rule', 'select, insert, update', 'select')`);

    this.addSql(`
      create table alert_run (
        id uuid primary key default gen_random_uuid(),
        organization_id uuid not null,
        plant_id uuid not null,
        day date not null,
        outcome text not null default 'pending'
          check (outcome in ('pending', 'sent', 'nothing-to-report', 'no-data', 'no-recipients', 'already-sent', 'disabled', 'failed')),
        detail text not null default '',
        created_at timestamptz not null default now(),
        finished_at timestamptz,
        unique (plant_id, day),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`call make_tenant_table('alert_run', 'select, insert, update', 'select, insert, update')`);

    this.addSql(`
      create table alert_delivery (
        id uuid primary key default gen_random_uuid(),
        organization_id uuid not null,
        plant_id uuid not null,
        day date not null,
        user_id uuid not null references app_user on delete cascade,
        email text not null,
        status text not null default 'pending' check (status in ('pending', 'sent', 'failed', 'suppressed')),
        subject text not null default '',
        provider_id text,
        failure text,
        sent_at timestamptz,
        acknowledged_at timestamptz,
        created_at timestamptz not null default now(),
        unique (plant_id, day, user_id),
        foreign key (plant_id, organization_id) references plant (id, organization_id) on delete cascade
      )`);
    this.addSql(`call make_tenant_table('alert_delivery', 'select, insert, update', 'select, insert, update')`);

    this.addSql(
      `create table worker_heartbeat (worker_id text primary key, seen_at timestamptz not null default now(), started_at timestamptz not null default now())`,
    );
    this.addSql(`grant select, insert, update, delete on worker_heartbeat to slackwater_worker`);
    this.addSql(`grant select on worker_heartbeat to slackwater_app`);

    // Written only by the local fake of the mail service, which exists in development and tests.
    this.addSql(`
      create table dev_mail (
        id uuid primary key default gen_random_uuid(),
        idempotency_key text unique,
        sender text not null,
        recipients jsonb not null,
        subject text not null,
        body_text text not null,
        body_html text not null,
        headers jsonb not null default '{}',
        created_at timestamptz not null default now()
      )`);
    this.addSql(`grant select, insert, delete on dev_mail to slackwater_app`);

    // Due work is found in rows: yesterday of every plant whose local send time has passed and that has no run for it yet.
    this.addSql(`
      create function claim_due_alerts(at timestamptz, most integer) returns table (run_id uuid, plant_id uuid, organization_id uuid, day date)
        language sql volatile security definer set search_path = public, pg_temp as $$
        insert into alert_run (organization_id, plant_id, day)
        select p.organization_id, p.id, ((at at time zone p.time_zone)::date - 1)
        from plant p join alert_rule r on r.plant_id = p.id
        where r.enabled and p.deleted_at is null and (at at time zone p.time_zone)::time >= r.send_at
          and not exists (select from alert_run x where x.plant_id = p.id and x.day = ((at at time zone p.time_zone)::date - 1))
        limit most
        on conflict do nothing
        returning id, plant_id, organization_id, day $$`);
    this.addSql(`revoke all on function claim_due_alerts(timestamptz, integer) from public`);
    this.addSql(`grant execute on function claim_due_alerts(timestamptz, integer) to slackwater_worker`);

    // Opening a signed link in a mail happens before anyone signs in.
    this.addSql(`
      create function delivery_tenant(delivery uuid) returns table (organization_id uuid, plant_id uuid, user_id uuid)
        language sql stable security definer set search_path = public, pg_temp as $$
        select d.organization_id, d.plant_id, d.user_id from alert_delivery d where d.id = delivery $$`);
    this.addSql(`revoke all on function delivery_tenant(uuid) from public`);
    this.addSql(`grant execute on function delivery_tenant(uuid) to slackwater_app`);
  }

  override down(): void {
    this.addSql(`drop function delivery_tenant`);
    this.addSql(`drop function claim_due_alerts`);
    for (const name of ['dev_mail', 'worker_heartbeat', 'alert_delivery', 'alert_run', 'alert_rule'])
      this.addSql(`drop table ${name}`);
  }
}
