import { spawn, spawnSync } from 'node:child_process';
import { chmodSync, existsSync, mkdirSync, mkdtempSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { createServer, type AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { ENVIRONMENT_NAMES } from '@/lib/env';

const SCRIPT = path.resolve(import.meta.dirname, '../../docker-free-dev.sh');
const SLOW_MACHINE_MS = 60_000;
let data = '';

beforeEach(() => {
  data = mkdtempSync(path.join(tmpdir(), 'slackwater-script-'));
  chmodSync(data, 0o755); // so that the user postgres may walk there when the tests run as root
});
afterEach(() => {
  rmSync(data, { recursive: true, force: true });
});

function script(args: string[], env: Record<string, string> = {}) {
  const clean = {
    NODE_ENV: 'test' as const,
    PATH: process.env.PATH ?? '',
    HOME: process.env.HOME ?? '',
    SLACKWATER_DATA: data,
  };
  const { status, stdout, stderr } = spawnSync(SCRIPT, args, {
    env: { ...clean, ...env },
    encoding: 'utf8',
    input: '',
  });
  return { status, stdout, stderr };
}

describe('words', () => {
  test('an unknown command is answered with the usage and exit 2', () => {
    const { status, stderr } = script(['strat']);
    expect(status).toBe(2);
    expect(stderr).toContain('"strat"');
    expect(stderr).toContain('usage: ./docker-free-dev.sh');
  });

  test('help explains every variable that a program reads', () => {
    const { status, stdout } = script(['help']);
    expect(status).toBe(0);
    expect(ENVIRONMENT_NAMES.filter((name) => !new RegExp(`\\b${name}\\b`).test(stdout))).toEqual([]);
  });
});

describe('a port', () => {
  test(
    'that is taken is named, with the variable to set and a free one',
    async () => {
      const server = createServer();
      await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
      const { port } = server.address() as AddressInfo;
      const { status, stderr } = script([], { PORT: String(port) });
      server.close();
      expect(status).toBe(1);
      expect(stderr).toMatch(new RegExp(`Port ${port} .* is taken .* PORT=\\d+ `));
    },
    SLOW_MACHINE_MS,
  );

  test.each(['0', '65536', 'http', '-1'])('cannot be %s', (port) => {
    const { status, stderr } = script([], { PORT: port });
    expect(status).toBe(1);
    expect(stderr).toContain(`PORT must be a port from 1 to 65535, not "${port}".`);
  });
});

describe('status and stop', () => {
  test('of a folder where nothing runs say so', () => {
    expect(script(['status'])).toMatchObject({ status: 3, stdout: expect.stringContaining('not made yet') as string });
    expect(script(['stop'])).toMatchObject({ status: 0, stdout: expect.stringContaining('Nothing of') as string });
  });

  test('leave a process alone that only has the number of one that ended', () => {
    const stranger = spawn('sleep', ['60'], { detached: true });
    mkdirSync(path.join(data, 'run'));
    for (const name of ['script', 'web', 'worker'])
      writeFileSync(path.join(data, 'run', name), `${stranger.pid} 12345@another-boot\n`);
    expect(script(['status']).stdout).not.toContain(`running (process ${stranger.pid})`);
    expect(script(['stop']).status).toBe(0);
    expect(stranger.exitCode).toBeNull();
    expect(existsSync(`/proc/${stranger.pid}`)).toBe(true);
    stranger.kill();
  });
});

describe('reset', () => {
  test('deletes nothing unless told to', () => {
    mkdirSync(path.join(data, 'secrets'));
    const { status, stderr } = script(['reset']);
    expect(status).toBe(1);
    expect(stderr).toContain('--yes');
    expect(existsSync(path.join(data, 'secrets'))).toBe(true);
  });

  test('deletes what the script made and leaves what it did not', () => {
    for (const name of ['secrets', 'cluster', 'holiday-pictures']) mkdirSync(path.join(data, name));
    expect(script(['reset', '--yes']).status).toBe(0);
    expect(existsSync(path.join(data, 'secrets'))).toBe(false);
    expect(existsSync(path.join(data, 'holiday-pictures'))).toBe(true);
  });

  test('refuses where the database is a server of somebody else', () => {
    const { status, stderr } = script(['reset', '--yes'], { DATABASE_URL: 'postgresql://o:p@db.example/slackwater' });
    expect(status).toBe(1);
    expect(stderr).toContain('Drop the database of DATABASE_URL yourself');
  });
});

test('data lies where the user postgres can walk to it, which a private folder of root is not', () => {
  chmodSync(data, 0o700);
  const folder = /^Data folder: +(.+)$/m.exec(script(['status']).stdout)?.[1];
  expect(folder).toMatch(process.getuid?.() === 0 ? /^\/var\/lib\/slackwater-[0-9a-f]{12}$/ : new RegExp(`^${data}$`));
});

test('secrets are made once, for their owner only', () => {
  const url = { DATABASE_URL: 'postgresql://owner:pw@127.0.0.1:1/slackwater' };
  script(['psql', 'app'], url); // nobody listens on port 1: it fails after the password was made
  const file = path.join(data, 'secrets/app-password');
  const first = readFileSync(file, 'utf8');
  expect(first).toMatch(/^[0-9a-f]{64}\n$/);
  expect(statSync(file).mode & 0o777).toBe(0o600);
  script(['psql', 'app'], url);
  expect(readFileSync(file, 'utf8')).toBe(first);
});
