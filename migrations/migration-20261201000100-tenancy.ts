import { Migration } from '@mikro-orm/migrations';

/** Organizations, people and how they get in; the row-level rule every later tenant table follows. */
export class Migration20261201000100Tenancy extends Migration {
  override up(): void {
    // The tenant of the present transaction. After a transaction with a local setting the value is '', not null.
    this.addSql(`
      create function app_orgs() returns uuid[] language sql stable as
      $$ select coalesce(nullif(current_setting('app.orgs', true), ''), '{}')::uuid[] $$`);

    // One call makes a table a tenant's: rows are seen and written only under withTenant().
    this.addSql(`
      create procedure make_tenant_table(target regclass, app_rights text, worker_rights text) language plpgsql as $$
      begin
        execute format('alter table %s enable row level security', target);
        execute format('create policy tenant on %s using (organization_id = any ((select app_orgs())::uuid[]))
                        with check (organization_id = any ((select app_orgs())::uuid[]))', target);
        if app_rights <> '' then execute format('grant %s on %s to slackwater_app', app_rights, target); end if;
        if worker_rights <> '' then execute format('grant %s on %s to slackwater_worker', worker_rights, target); end if;
      end $$`);

    this.addSql(`
      create table organization (
        id uuid primary key default gen_random_uuid(),
        name text not null check (length(name) between 1 and 120),
        created_at timestamptz not null default now()
      )`);
    this.addSql(`alter table organization enable row level security`);
    this.addSql(`create policy tenant on organization using (id = any ((select app_orgs())::uuid[]))
                 with check (id = any ((select app_orgs())::uuid[]))`);
    this.addSql(`grant select, update on organization to slackwater_app`);
    this.addSql(`grant select on organization to slackwater_worker`);

    this.addSql(`
      create table app_user (
        id uuid primary key default gen_random_uuid(),
        email text not null unique check (email = lower(email)),
        name text not null,
        password_hash text not null,
        unit_system text not null default 'ip' check (unit_system in ('ip', 'si')),
        mail_suppressed_at timestamptz,
        created_at timestamptz not null default now()
      )`);
    this.addSql(`
      create table session (
        id text primary key,
        user_id uuid not null references app_user on delete cascade,
        expires_at timestamptz not null,
        created_at timestamptz not null default now()
      )`);
    this.addSql(`create index session_user_id on session (user_id)`);
    this.addSql(`create index session_expires_at on session (expires_at)`);

    this.addSql(`
      create table membership (
        organization_id uuid not null references organization on delete cascade,
        user_id uuid not null references app_user on delete cascade,
        role text not null check (role in ('owner', 'engineer', 'consultant', 'operator')),
        created_at timestamptz not null default now(),
        primary key (organization_id, user_id)
      )`);
    this.addSql(`create index membership_user_id on membership (user_id)`);
    this.addSql(`call make_tenant_table('membership', 'select, insert, update, delete', 'select')`);

    // People are seen by those who share an organization with them, and never with their password's hash.
    this.addSql(`alter table app_user enable row level security`);
    this.addSql(`create policy fellow_member on app_user for select using (exists (
                   select from membership m where m.user_id = app_user.id
                     and m.organization_id = any ((select app_orgs())::uuid[])))`);
    this.addSql(
      `grant select (id, email, name, unit_system, mail_suppressed_at, created_at) on app_user to slackwater_app, slackwater_worker`,
    );

    this.addSql(`
      create table api_token (
        id uuid primary key default gen_random_uuid(),
        organization_id uuid not null references organization on delete cascade,
        plant_id uuid,
        name text not null,
        scope text not null check (scope in ('ingest', 'read', 'manage')),
        token_hash bytea not null unique,
        created_by uuid references app_user on delete set null,
        created_at timestamptz not null default now(),
        expires_at timestamptz,
        revoked_at timestamptz,
        last_used_at timestamptz,
        check (scope <> 'ingest' or plant_id is not null)
      )`);
    this.addSql(`create index api_token_organization_id on api_token (organization_id, created_at)`);
    this.addSql(`call make_tenant_table('api_token', 'select, insert, update', '')`);

    this.addSql(`
      create table audit_event (
        id bigint generated always as identity primary key,
        organization_id uuid not null references organization on delete cascade,
        at timestamptz not null default now(),
        actor_user_id uuid references app_user on delete set null,
        actor_token_id uuid,
        action text not null,
        subject_kind text not null,
        subject_id text not null,
        detail jsonb not null default '{}'
      )`);
    this.addSql(`create index audit_event_organization_at on audit_event (organization_id, at desc)`);
    this.addSql(`call make_tenant_table('audit_event', 'select, insert', 'insert')`);

    this.addSql(`
      create table idempotency_key (
        organization_id uuid not null references organization on delete cascade,
        route text not null,
        key text not null,
        body_hash text not null,
        status integer,
        response jsonb,
        created_at timestamptz not null default now(),
        primary key (organization_id, route, key)
      )`);
    this.addSql(`call make_tenant_table('idempotency_key', 'select, insert, update, delete', '')`);

    // Kept by rate-limiter-flexible; holds counters of addresses, nothing of a tenant's.
    this.addSql(
      `create table rate_limit (key varchar(255) primary key, points integer not null default 0, expire bigint)`,
    );
    this.addSql(`grant select, insert, update, delete on rate_limit to slackwater_app`);

    this.addDoors();
  }

  /** What happens before a tenant is known: narrow functions with the owner's rights and a fixed search path. */
  private addDoors(): void {
    const door = (signature: string, returns: string, body: string) => {
      this.addSql(`create function ${signature} returns ${returns} language sql volatile security definer
        set search_path = public, pg_temp as $$ ${body} $$`);
      this.addSql(
        `revoke all on function ${signature.replace(/\b[a-z_]+ (text|uuid|timestamptz|bytea)/g, '$1')} from public`,
      );
      this.addSql(
        `grant execute on function ${signature.replace(/\b[a-z_]+ (text|uuid|timestamptz|bytea)/g, '$1')} to slackwater_app`,
      );
    };
    door(
      'auth_user_by_email(address text)',
      'table (id uuid, password_hash text)',
      `select u.id, u.password_hash from app_user u where u.email = lower(address)`,
    );
    door(
      'auth_session(session_id text)',
      'table (id text, user_id uuid, expires_at timestamptz, email text, name text, unit_system text)',
      `select s.id, s.user_id, s.expires_at, u.email, u.name, u.unit_system from session s join app_user u on u.id = s.user_id where s.id = session_id`,
    );
    door(
      'auth_user_sessions(owner uuid)',
      'table (id text, user_id uuid, expires_at timestamptz)',
      `select s.id, s.user_id, s.expires_at from session s where s.user_id = owner`,
    );
    door(
      'auth_create_session(session_id text, owner uuid, until timestamptz)',
      'void',
      `insert into session (id, user_id, expires_at) values (session_id, owner, until)`,
    );
    door(
      'auth_extend_session(session_id text, until timestamptz)',
      'void',
      `update session set expires_at = until where id = session_id`,
    );
    door('auth_delete_session(session_id text)', 'void', `delete from session where id = session_id`);
    door('auth_delete_user_sessions(owner uuid)', 'void', `delete from session where user_id = owner`);
    door('auth_delete_expired_sessions()', 'void', `delete from session where expires_at < now()`);
    door(
      'auth_memberships(person uuid)',
      'table (organization_id uuid, organization_name text, role text)',
      `select m.organization_id, o.name, m.role from membership m join organization o on o.id = m.organization_id
       where m.user_id = person order by o.name`,
    );
    door(
      'auth_set_unit_system(person uuid, system text)',
      'void',
      `update app_user set unit_system = system where id = person`,
    );
    door(
      'auth_token(hash bytea)',
      'table (id uuid, organization_id uuid, organization_name text, plant_id uuid, scope text, created_by uuid)',
      `update api_token t set last_used_at = now() from organization o
       where t.token_hash = hash and o.id = t.organization_id and t.revoked_at is null and (t.expires_at is null or t.expires_at > now())
       returning t.id, t.organization_id, o.name, t.plant_id, t.scope, t.created_by`,
    );
    door(
      'auth_create_account(organization_name text, person_name text, address text, hash text)',
      'table (user_id uuid, organization_id uuid)',
      `with new_user as (insert into app_user (email, name, password_hash) values (lower(address), person_name, hash) returning id),
            new_organization as (insert into organization (name) values (organization_name) returning id),
            new_membership as (insert into membership (organization_id, user_id, role)
              select o.id, u.id, 'owner' from new_organization o, new_user u returning organization_id, user_id)
       select user_id, organization_id from new_membership`,
    );
  }

  override down(): void {
    for (const name of [
      'auth_user_by_email',
      'auth_session',
      'auth_user_sessions',
      'auth_create_session',
      'auth_extend_session',
      'auth_delete_session',
      'auth_delete_user_sessions',
      'auth_delete_expired_sessions',
      'auth_memberships',
      'auth_set_unit_system',
      'auth_token',
      'auth_create_account',
    ]) {
      this.addSql(`drop function ${name}`);
    }
    for (const name of ['rate_limit', 'idempotency_key', 'audit_event', 'api_token']) this.addSql(`drop table ${name}`);
    this.addSql(`drop policy fellow_member on app_user`);
    for (const name of ['membership', 'session', 'app_user', 'organization']) this.addSql(`drop table ${name}`);
    this.addSql(`drop procedure make_tenant_table`);
    this.addSql(`drop function app_orgs`);
  }
}
