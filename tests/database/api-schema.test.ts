import { MikroORM } from '@mikro-orm/postgresql';
import pg from 'pg';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { ormConfig } from '@/lib/db/orm-config';
import { createTestDatabase } from '../support/database';

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: pg.Client;
let app: pg.Client;
let worker: pg.Client;
const connect = async (connectionString: string) => {
  const client = new pg.Client({ connectionString });
  await client.connect();
  return client;
};
beforeAll(async () => {
  database = await createTestDatabase();
  [owner, app, worker] = await Promise.all([
    connect(database.ownerUrl),
    connect(database.appUrl),
    connect(database.workerUrl),
  ]);
});
afterAll(async () => {
  await Promise.all([owner, app, worker].map((client) => client.end()));
  await database.drop();
});

const names = async (text: string, client = owner): Promise<string[]> =>
  (await client.query<{ name: string }>(text)).rows.map((row) => row.name);

describe('tenancy in the database', () => {
  it('every table with an organization has row-level security on and a policy', async () => {
    const tables = await names(
      `select c.relname as name from pg_class c join pg_attribute a on a.attrelid = c.oid and a.attname = 'organization_id' and not a.attisdropped
       where c.relkind in ('r', 'p') and c.relnamespace = 'public'::regnamespace order by 1`,
    );
    expect(tables.length).toBeGreaterThan(15);
    const open = await names(
      `select c.relname as name from pg_class c join pg_attribute a on a.attrelid = c.oid and a.attname = 'organization_id' and not a.attisdropped
       where c.relkind in ('r', 'p') and c.relnamespace = 'public'::regnamespace
         and (not c.relrowsecurity or not exists (
           select from pg_policy p where p.polrelid = c.oid and p.polwithcheck is not null and p.polqual is not null))`,
    );
    expect(open).toEqual([]);
  });
  it('every view runs with the rights and the tenancy of whoever asks', async () => {
    const views = await names(`select viewname as name from pg_views where schemaname = 'public' order by 1`);
    expect(views).toContain('interval_result');
    const leaking = await names(
      `select c.relname as name from pg_class c where c.relkind in ('v', 'm') and c.relnamespace = 'public'::regnamespace
         and not coalesce('security_invoker=true' = any (c.reloptions), false)`,
    );
    expect(leaking).toEqual([]);
  });
  it('every function with the owner’s rights has a fixed search path and is not everyone’s', async () => {
    const loose = await names(
      `select p.proname as name from pg_proc p where p.prosecdef and p.pronamespace = 'public'::regnamespace
         and (not coalesce(p.proconfig::text like '%search_path%', false)
              or p.proacl is null or exists (select from aclexplode(p.proacl) a where a.grantee = 0))`,
    );
    expect(loose).toEqual([]);
  });
  it('neither program’s role owns anything, is a superuser or passes row-level security', async () => {
    const roles = await owner.query(
      `select rolname, rolsuper, rolbypassrls, rolcreatedb, rolcreaterole from pg_roles where rolname in ('slackwater_app', 'slackwater_worker') order by 1`,
    );
    const plain = { rolsuper: false, rolbypassrls: false, rolcreatedb: false, rolcreaterole: false };
    expect(roles.rows).toEqual([
      { rolname: 'slackwater_app', ...plain },
      { rolname: 'slackwater_worker', ...plain },
    ]);
    const owned = await names(
      `select c.relname as name from pg_class c join pg_roles r on r.oid = c.relowner where r.rolname in ('slackwater_app', 'slackwater_worker')`,
    );
    expect(owned).toEqual([]);
  });
});

describe('without a tenant', () => {
  it('the programs see no row of any tenant’s table', async () => {
    const organization = await owner.query<{ id: string }>(
      `insert into organization (name) values ('Here') returning id`,
    );
    const id = organization.rows[0]?.id ?? '';
    await owner.query(
      `insert into plant (organization_id, name, time_zone, arrangement, step_minutes) values ($1, 'P', 'UTC', 'primary-secondary', 5)`,
      [id],
    );
    for (const client of [app, worker]) {
      expect((await client.query(`select 1 from plant`)).rowCount).toBe(0);
      expect((await client.query(`select 1 from organization`)).rowCount).toBe(0);
      await client.query('begin');
      await client.query(`select set_config('app.orgs', $1, true)`, [`{${id}}`]);
      expect((await client.query(`select 1 from plant`)).rowCount).toBe(1);
      await client.query('commit');
      // The setting was the transaction's: the next borrower of the connection has none.
      expect((await client.query(`select 1 from plant`)).rowCount).toBe(0);
    }
  });
  it('the application cannot write a row into a tenant it was not given', async () => {
    const organization = await owner.query<{ id: string }>(
      `insert into organization (name) values ('There') returning id`,
    );
    const write = app.query(
      `insert into plant (organization_id, name, time_zone, arrangement, step_minutes) values ($1, 'P', 'UTC', 'primary-secondary', 5)`,
      [organization.rows[0]?.id],
    );
    await expect(write).rejects.toThrow(/row-level security/);
  });
});

describe('passwords’ hashes and sessions', () => {
  it.each(['password_hash', '*'])('cannot be read from app_user (%s)', async (columns) => {
    for (const client of [app, worker])
      await expect(client.query(`select ${columns} from app_user`)).rejects.toThrow(/permission denied/);
  });
  it('sessions cannot be read from their table', async () => {
    for (const client of [app, worker])
      await expect(client.query(`select id from session`)).rejects.toThrow(/permission denied/);
  });
  it('the sign-in functions are closed to the worker', async () => {
    await expect(worker.query(`select auth_user_by_email('a@b.example')`)).rejects.toThrow(/permission denied/);
  });
});

describe('entities and migrations', () => {
  it('each entity has exactly the columns of its table, with the same right to be empty', async () => {
    const orm = await MikroORM.init(ormConfig(database.ownerUrl, 1));
    try {
      for (const meta of Object.values(orm.getMetadata().getAll())) {
        const mapped = meta.props
          .filter((prop) => prop.persist !== false)
          .map((prop) => `${prop.fieldNames[0] ?? ''}${prop.nullable === true ? ' null' : ''}`);
        const { rows } = await owner.query<{ name: string }>(
          `select column_name || case is_nullable when 'YES' then ' null' else '' end as name
           from information_schema.columns where table_schema = 'public' and table_name = $1`,
          [meta.tableName],
        );
        expect({ table: meta.tableName, columns: mapped.sort() }).toEqual({
          table: meta.tableName,
          columns: rows.map((row) => row.name).sort(),
        });
      }
    } finally {
      await orm.close(true);
    }
  });
  it('can be taken back to nothing and applied again', async () => {
    const orm = await MikroORM.init({ ...ormConfig(database.ownerUrl, 2), logger: () => undefined });
    const objects = () =>
      names(
        `select c.relname as name from pg_class c where c.relnamespace = 'public'::regnamespace and c.relkind in ('r', 'v', 'S') and c.relname not like 'mikro_orm%'
         union all select p.proname from pg_proc p where p.pronamespace = 'public'::regnamespace order by 1`,
      );
    const before = await objects();
    try {
      await orm.migrator.down({ to: 0 });
      expect(await objects()).toEqual([]);
      await orm.migrator.up();
      expect(await objects()).toEqual(before);
    } finally {
      await orm.close(true);
    }
  });
});
