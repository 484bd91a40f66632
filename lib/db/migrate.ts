import { MikroORM } from '@mikro-orm/postgresql';
import pg from 'pg';
import PgBoss from 'pg-boss';
import { ormConfig } from './orm-config';
import { QUEUES } from './queues';

export interface DatabaseUrls {
  ownerUrl: string;
  appUrl: string;
  workerUrl: string;
}

/** The roles that migrations grant to; neither owns a table or passes row-level security. */
const ROLE_NAMES = { appUrl: 'slackwater_app', workerUrl: 'slackwater_worker' } as const;

/**
 * Brings a database to the present schema: roles, migrations, the job queue's schema and queues, grants. Safe to run again and
 * by two at once (an advisory lock). Throws with a sentence when a URL names another role than the migrations grant to.
 */
export async function migrateDatabase(urls: DatabaseUrls): Promise<void> {
  const client = new pg.Client({ connectionString: urls.ownerUrl });
  await client.connect();
  try {
    await client.query(`select pg_advisory_lock(hashtext('slackwater.migrate'))`);
    await ensureRoles(client, urls);
    const orm = await MikroORM.init(ormConfig(urls.ownerUrl, 2));
    try {
      await orm.migrator.up();
    } finally {
      await orm.close(true);
    }
    await installQueues(urls.ownerUrl);
    await grantQueues(client);
  } finally {
    await client.end();
  }
}

async function ensureRoles(client: pg.Client, urls: DatabaseUrls): Promise<void> {
  for (const key of ['appUrl', 'workerUrl'] as const) {
    const url = new URL(urls[key]);
    const role = ROLE_NAMES[key];
    if (decodeURIComponent(url.username) !== role) {
      throw new Error(
        `The ${key === 'appUrl' ? 'DATABASE_APP_URL' : 'DATABASE_WORKER_URL'} must sign in as ${role}, not as "${url.username}".`,
      );
    }
    const found = await client.query(`select 1 from pg_roles where rolname = $1`, [role]);
    if (found.rowCount === 0)
      await client.query(`create role ${role} login nosuperuser nocreatedb nocreaterole nobypassrls`);
    const password = decodeURIComponent(url.password);
    if (password !== '') await client.query(`alter role ${role} password ${client.escapeLiteral(password)}`);
  }
  await client.query(`grant usage on schema public to slackwater_app, slackwater_worker`);
}

async function installQueues(connectionString: string): Promise<void> {
  const boss = new PgBoss({ connectionString, supervise: false, schedule: false, max: 1 });
  boss.on('error', () => undefined); // an error of a running call is thrown to its caller as well
  await boss.start();
  try {
    for (const [name, options] of Object.entries(QUEUES)) {
      await boss.createQueue(name, { name, policy: 'standard', ...options });
      await boss.updateQueue(name, { name, policy: 'standard', ...options });
    }
  } finally {
    await boss.stop({ graceful: false, close: true });
  }
}

async function grantQueues(client: pg.Client): Promise<void> {
  await client.query(`grant usage on schema pgboss to slackwater_app, slackwater_worker`);
  await client.query(`grant select, insert on all tables in schema pgboss to slackwater_app`);
  await client.query(`grant select, insert, update, delete on all tables in schema pgboss to slackwater_worker`);
  await client.query(`grant select on mikro_orm_migrations to slackwater_app, slackwater_worker`);
}
