import { createHash } from 'node:crypto';
import { readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import pg from 'pg';
import type { TestProject } from 'vitest/node';
import { holdTestCluster, type TestCluster } from './test-cluster';

declare module 'vitest' {
  interface ProvidedContext {
    /** The template database and the three connections to it; `createTestDatabase` clones it. */
    template: { ownerUrl: string; appUrl: string; workerUrl: string };
  }
}

const ROOT = path.resolve(import.meta.dirname, '../..');
/** What decides how a migrated database looks; a template made from the same bytes is used again. */
const SCHEMA_SOURCES = ['entities', 'lib/db', 'migrations', 'package-lock.json'];

/**
 * Gives the database tests a migrated template to clone. With DATABASE_URL the server named there is used, and nothing on it but
 * databases whose names begin with slackwater_template or slackwater_test; otherwise the project's own test server is started, and
 * stopped again after the last of those who use it.
 */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  const cluster = givenServer() ?? (await holdTestCluster(ROOT));
  try {
    const name = await prepareTemplate(cluster);
    project.provide('template', {
      ownerUrl: onDatabase(cluster.ownerUrl, name),
      appUrl: onDatabase(cluster.appUrl, name),
      workerUrl: onDatabase(cluster.workerUrl, name),
    });
  } catch (error) {
    await cluster.release();
    throw error;
  }
  return () => cluster.release();
}

function givenServer(): TestCluster | null {
  const { DATABASE_URL: ownerUrl, DATABASE_APP_URL: appUrl, DATABASE_WORKER_URL: workerUrl } = process.env;
  if (!ownerUrl) return null;
  // Roles belong to the whole server: making up passwords here could lock a product out that lives on the same one.
  if (!appUrl || !workerUrl)
    throw new Error(
      'With DATABASE_URL, give DATABASE_APP_URL and DATABASE_WORKER_URL too, or none of them to use a throwaway server.',
    );
  return { ownerUrl, appUrl, workerUrl, fresh: false, release: () => Promise.resolve() };
}

/** Answers the template's name. One run at a time makes it; a half-made one bears another name and is made again. */
async function prepareTemplate(cluster: TestCluster): Promise<string> {
  const name = `slackwater_template_${schemaHash()}`;
  const client = new pg.Client({ connectionString: onDatabase(cluster.ownerUrl, 'postgres') });
  await client.connect();
  try {
    await client.query(`select pg_advisory_lock(hashtext('slackwater.template'))`);
    const { rows } = await client.query<{ datname: string }>(
      `select datname from pg_database where datname ~ '^slackwater_(template|test)_'`,
    );
    const known = rows.map((row) => row.datname);
    // Only when nobody else uses the server: what is left over there belongs to runs that were killed, or to older schemas.
    const leftOver = cluster.fresh ? known.filter((each) => each !== name) : [];
    for (const each of leftOver) await client.query(`drop database if exists ${each} with (force)`);
    if (known.includes(name)) return name;
    const making = `${name}_making`;
    await client.query(`drop database if exists ${making} with (force)`);
    await client.query(`create database ${making}`);
    const { migrateDatabase } = await import('@/lib/db/migrate');
    await migrateDatabase({
      ownerUrl: onDatabase(cluster.ownerUrl, making),
      appUrl: cluster.appUrl,
      workerUrl: cluster.workerUrl,
    });
    await client.query(`alter database ${making} rename to ${name}`);
    return name;
  } finally {
    await client.end();
  }
}

function schemaHash(): string {
  const hash = createHash('sha256');
  for (const source of SCHEMA_SOURCES) for (const file of filesOf(source)) hash.update(file).update(readFileSync(file));
  return hash.digest('hex').slice(0, 12);
}

function filesOf(source: string): string[] {
  const start = path.join(ROOT, source);
  if (path.extname(start) !== '') return [start];
  return readdirSync(start, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => path.join(entry.parentPath, entry.name))
    .sort();
}

function onDatabase(connectionUrl: string, name: string): string {
  const url = new URL(connectionUrl);
  url.pathname = `/${name}`;
  return url.href;
}
