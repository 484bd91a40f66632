import { chmodSync, existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import pg from 'pg';
import { afterAll, afterEach, beforeAll, describe, expect, test } from 'vitest';
import { holdTestCluster, type TestCluster } from '../support/test-cluster';

const ROOT = path.resolve(import.meta.dirname, '../..');
/** Making a cluster takes some 3 s alone and many times that beside a build. */
const SLOW_MACHINE_MS = 180_000;
let data = '';
let pidFile = '';
const held: TestCluster[] = [];

beforeAll(() => {
  data = mkdtempSync(path.join(tmpdir(), 'slackwater-cluster-'));
  chmodSync(data, 0o755); // so that the user postgres may walk there when the tests run as root
  pidFile = path.join(data, 'test/cluster/data/postmaster.pid');
});
afterEach(async () => {
  for (const cluster of held.splice(0)) await cluster.release();
});
afterAll(() => {
  rmSync(data, { recursive: true, force: true });
});

async function hold(): Promise<TestCluster> {
  const cluster = await holdTestCluster(ROOT, { ...process.env, SLACKWATER_DATA: data });
  held.push(cluster);
  return cluster;
}

async function ask<Row extends pg.QueryResultRow>(connectionString: string, sql: string): Promise<Row | undefined> {
  const client = new pg.Client({ connectionString });
  await client.connect();
  try {
    return (await client.query<Row>(sql)).rows[0];
  } finally {
    await client.end();
  }
}

const serverPid = () => Number(readFileSync(pidFile, 'utf8').split('\n')[0]);

describe('the project’s own database server', { timeout: SLOW_MACHINE_MS }, () => {
  test('listens on loopback only and asks for the password', async () => {
    const { ownerUrl } = await hold();
    expect(await ask(ownerUrl, `show listen_addresses`)).toEqual({ listen_addresses: '127.0.0.1' });
    const wrong = new URL(ownerUrl);
    wrong.password = 'wrong';
    await expect(ask(wrong.href, 'select 1')).rejects.toThrow('password authentication failed');
  });

  test('has an owner who may make roles and databases, and is no superuser', async () => {
    const { ownerUrl } = await hold();
    const sql = `select rolsuper, rolbypassrls, rolcreaterole, rolcreatedb from pg_roles where rolname = current_user`;
    expect(await ask(ownerUrl, sql)).toEqual({
      rolsuper: false,
      rolbypassrls: false,
      rolcreaterole: true,
      rolcreatedb: true,
    });
  });

  test('is shared by those who hold it and stopped by the last of them', async () => {
    const first = await hold();
    const second = await hold();
    expect([first.fresh, second.fresh]).toEqual([true, false]);
    expect(second.ownerUrl).toBe(first.ownerUrl);
    await first.release();
    expect(await ask(second.ownerUrl, 'select 1 as one')).toEqual({ one: 1 });
    await second.release();
    expect(existsSync(pidFile)).toBe(false);
  });

  test('starts again after it was killed, with what was stored', async () => {
    const before = await hold();
    // The throwaway server may lose its last half second when killed, unless a session asks for better.
    const careful = `${before.ownerUrl}?options=-c%20synchronous_commit%3Don`;
    await ask(careful, 'create table kept as select 42 as answer');
    process.kill(serverPid(), 'SIGKILL');
    const after = await hold();
    expect(after.fresh).toBe(true);
    expect(await ask(after.ownerUrl, 'select answer from kept')).toEqual({ answer: 42 });
  });

  test('starts when its last number now belongs to another process, which is left alone', async () => {
    await (await hold()).release();
    writeFileSync(pidFile, `${process.pid}\n`);
    const { ownerUrl } = await hold();
    expect(await ask(ownerUrl, 'select 1 as one')).toEqual({ one: 1 });
  });

  test('is made again when it was only half made', async () => {
    await (await hold()).release();
    rmSync(path.join(data, 'test/cluster/ready'));
    rmSync(path.join(data, 'test/cluster/data/global'), { recursive: true });
    const { ownerUrl } = await hold();
    expect(await ask(ownerUrl, `select to_regclass('kept') as kept`)).toEqual({ kept: null });
  });
});
