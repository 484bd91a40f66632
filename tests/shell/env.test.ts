import { describe, expect, test } from 'vitest';
import { EnvironmentError, readEnv } from '@/lib/env';

const SECRET = 's'.repeat(32);
const WORKER = { DATABASE_WORKER_URL: 'postgresql://slackwater_worker:pw@db:5432/slackwater', APP_SECRET: SECRET };
const WEB = { DATABASE_APP_URL: 'postgresql://slackwater_app:pw@db:5432/slackwater', APP_SECRET: SECRET };
const OWNER = 'postgresql://owner:pw@db/slackwater';
const ALL_THREE = { DATABASE_URL: OWNER, DATABASE_APP_URL: OWNER, DATABASE_WORKER_URL: OWNER };

function problemsOf(run: () => unknown): string[] {
  try {
    run();
  } catch (error) {
    if (error instanceof EnvironmentError) return [...error.problems];
    throw error;
  }
  return [];
}
const namesOf = (problems: string[]) => problems.map((problem) => problem.split(' ')[0]).sort();

describe('readEnv', () => {
  test('names every missing variable at once, each in a sentence', () => {
    const problems = problemsOf(() => readEnv('worker', {}));
    expect(namesOf(problems)).toEqual(['APP_SECRET', 'DATABASE_WORKER_URL', 'MAIL_FROM', 'RESEND_API_KEY']);
    for (const problem of problems) expect(problem).toMatch(/^[A-Z_]+ .+\.$/);
  });

  test('names every wrong variable and shows none of the values', () => {
    const wrong = {
      PORT: '0',
      PUBLIC_URL: 'https://tide.example/app',
      DATABASE_APP_URL: 'hunter2',
      APP_SECRET: 'short',
      SIGN_UP: 'perhaps',
      UPLOAD_LIMIT_BYTES: '2GB',
      LOG_LEVEL: 'loud',
      LOCAL_FAKES: 'yes',
      RESEND_BASE_URL: 'ftp://mail.example',
      MAIL_FROM: 'nobody',
    };
    const problems = problemsOf(() => readEnv('web', wrong));
    expect(namesOf(problems)).toEqual(Object.keys(wrong).sort());
    expect(problems.join('\n')).not.toMatch(/hunter2|perhaps|nobody|loud/);
  });

  test('asks each program only for what it needs: the web never for the owner', () => {
    expect(readEnv('web', WEB)).not.toHaveProperty('DATABASE_URL');
    expect(namesOf(problemsOf(() => readEnv('migrate', {})))).toEqual([
      'DATABASE_APP_URL',
      'DATABASE_URL',
      'DATABASE_WORKER_URL',
    ]);
  });

  test('an empty variable counts as not set', () => {
    expect(readEnv('web', { ...WEB, PUBLIC_URL: '', PORT: ' ' }).PORT).toBe(3000);
  });

  test('local fakes stand in for the mail settings, and settings given win over them', () => {
    const env = readEnv('worker', { ...WORKER, LOCAL_FAKES: '1', PORT: '3107', MAIL_FROM: 'a@b.example' });
    expect(env.RESEND_BASE_URL).toBe('http://127.0.0.1:3107/dev/resend');
    expect(env.RESEND_API_KEY).not.toBe('');
    expect(env.MAIL_FROM).toBe('a@b.example');
  });

  test('refuses the local mailbox behind a public https address', () => {
    const public_ = { ...WEB, LOCAL_FAKES: '1', PUBLIC_URL: 'https://tide.example' };
    expect(namesOf(problemsOf(() => readEnv('web', public_)))).toEqual(['LOCAL_FAKES']);
  });

  test('refuses the well-known demo password behind a public https address, and takes another or none', () => {
    const demo = { ...ALL_THREE, PUBLIC_URL: 'https://tide.example' };
    expect(namesOf(problemsOf(() => readEnv('demo', demo)))).toEqual(['DEMO_PASSWORD']);
    expect(readEnv('demo', { ...demo, DEMO_PASSWORD: 'another-tide' }).DEMO_PASSWORD).toBe('another-tide');
    expect(readEnv('demo', { ...demo, DEMO: '0' }).DEMO).toBe(false);
  });

  test('takes a connection with several hosts, as a primary with standbys has', () => {
    const url = 'postgresql://slackwater_worker:pw@db1:5432,db2:5432/slackwater?target_session_attrs=read-write';
    expect(readEnv('worker', { ...WORKER, LOCAL_FAKES: '1', DATABASE_WORKER_URL: url }).DATABASE_WORKER_URL).toBe(url);
  });

  test.each([
    [{ PUBLIC_URL: 'https://tide.example/' }, 'https://tide.example'],
    [{ HOST: '0.0.0.0', PORT: '8080' }, 'http://127.0.0.1:8080'],
    [{ HOST: '::' }, 'http://[::1]:3000'],
  ])('links lead to an address that can be opened: %j', (given, origin) => {
    expect(readEnv('web', { ...WEB, ...given }).LINK_ORIGIN).toBe(origin);
  });
});
