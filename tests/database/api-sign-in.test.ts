import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { POST as createAccount } from '@/app/api/v1/accounts/route';
import { GET as readMe, PATCH as patchMe } from '@/app/api/v1/me/route';
import { DELETE as signOut, POST as signIn } from '@/app/api/v1/session/route';
import { lucia } from '@/lib/auth/lucia';
import { ask, makeOrganization, makePerson, startTestApi, type TestApi } from '../support/api';

let api: TestApi;
beforeAll(async () => {
  api = await startTestApi();
});
afterAll(() => api.close());

const PASSWORD = 'a long enough password';
const ACCOUNT = { organizationName: 'Harbour Estates', name: 'Ada', email: 'Ada@Test.Example', password: PASSWORD };
const cookieOf = (response: Response) => (response.headers.get('set-cookie') ?? '').split(';')[0] ?? '';
const problemOf = async (response: Response) =>
  (await response.json()) as { status: number; detail: string; triesLeft?: number; errors?: { path: string }[] };

describe('an account', () => {
  it('is a person who owns an organization and is signed in', async () => {
    const response = await ask(createAccount, 'POST', { json: ACCOUNT });
    expect(response.status).toBe(201);
    const me = (await (await ask(readMe, 'GET', { cookie: cookieOf(response) })).json()) as Record<string, unknown>;
    expect(me).toMatchObject({
      email: 'ada@test.example',
      name: 'Ada',
      unitSystem: 'ip',
      memberships: [{ organizationName: 'Harbour Estates', role: 'owner' }],
    });
  });
  it('is refused for a known address, saying where', async () => {
    const response = await ask(createAccount, 'POST', { json: { ...ACCOUNT, email: 'ADA@test.example' } });
    expect(response.status).toBe(409);
    expect((await problemOf(response)).errors).toMatchObject([{ path: 'email' }]);
  });
  it('sent again with an Idempotency-Key and the same password is the same account', async () => {
    const headers = { 'idempotency-key': 'one' };
    const json = { ...ACCOUNT, email: 'twice@test.example' };
    const first = await ask(createAccount, 'POST', { json, headers });
    const second = await ask(createAccount, 'POST', { json, headers });
    expect([first.status, second.status]).toEqual([201, 201]);
    expect(await second.json()).toEqual(await first.json());
    const stranger = await ask(createAccount, 'POST', { json: { ...json, password: `${PASSWORD}!` }, headers });
    expect(stranger.status).toBe(409);
  });
  it('with a short password is refused with a sentence at the field', async () => {
    const response = await ask(createAccount, 'POST', {
      json: { ...ACCOUNT, email: 'x@test.example', password: 'short' },
    });
    expect(response.status).toBe(400);
    expect(await problemOf(response)).toMatchObject({
      errors: [{ path: 'password', message: 'Choose a password of at least 12 characters.' }],
    });
  });
  it('is not made where sign-up is switched off', async () => {
    vi.stubEnv('SIGN_UP', 'off');
    const response = await ask(createAccount, 'POST', { json: { ...ACCOUNT, email: 'late@test.example' } });
    vi.unstubAllEnvs();
    expect(response.status).toBe(403);
  });
  it('is limited in rate for one address', async () => {
    const json = { ...ACCOUNT, email: 'eager@test.example' };
    const headers = { 'x-forwarded-for': '198.51.100.7' };
    const statuses: number[] = [];
    for (let count = 0; count < 6; count++) statuses.push((await ask(createAccount, 'POST', { json, headers })).status);
    expect(statuses).toEqual([201, 409, 409, 409, 409, 429]);
  });
});

describe('a session', () => {
  it('begins with the right password, whatever the case of the address, and ends with signing out', async () => {
    const entered = await ask(signIn, 'POST', { json: { email: 'ada@TEST.example', password: PASSWORD } });
    expect(entered.status).toBe(204);
    const cookie = cookieOf(entered);
    expect((await ask(readMe, 'GET', { cookie })).status).toBe(200);
    const left = await ask(signOut, 'DELETE', { cookie });
    expect(left.status).toBe(204);
    expect(left.headers.get('set-cookie')).toContain('Max-Age=0');
    expect((await ask(readMe, 'GET', { cookie })).status).toBe(401);
  });
  it('is kept by hash: what the table holds signs nobody in', async () => {
    const cookie = cookieOf(await ask(signIn, 'POST', { json: { email: ACCOUNT.email, password: PASSWORD } }));
    const stored = await api.owner.query<{ id: string }>(`select id from session`);
    const secret = cookie.split('=')[1] ?? '';
    expect(stored.rows.map((row) => row.id)).not.toContain(secret);
    const forged = `${lucia().sessionCookieName}=${stored.rows[0]?.id ?? ''}`;
    expect((await ask(readMe, 'GET', { cookie: forged })).status).toBe(401);
  });
  it('that has expired is signed out and its cookie emptied', async () => {
    const person = await makePerson(api, []);
    await api.owner.query(`update session set expires_at = now() - interval '1 second' where user_id = $1`, [
      person.userId,
    ]);
    const response = await ask(readMe, 'GET', { cookie: person.cookie });
    expect(response.status).toBe(401);
    expect(response.headers.get('set-cookie')).toContain('Max-Age=0');
  });
  it('is prolonged when half of it has passed', async () => {
    const person = await makePerson(api, []);
    await api.owner.query(`update session set expires_at = now() + interval '14 days' where user_id = $1`, [
      person.userId,
    ]);
    const response = await ask(readMe, 'GET', { cookie: person.cookie });
    expect(response.headers.get('set-cookie')).toContain(person.cookie);
    const { rows } = await api.owner.query<{ days: number }>(
      `select extract(epoch from expires_at - now()) / 86400 as days from session where user_id = $1`,
      [person.userId],
    );
    expect(Number(rows[0]?.days)).toBeGreaterThan(29);
  });
  it('cookie is HttpOnly and Lax on plain http; bound to the host and Secure behind https', async () => {
    const json = { email: ACCOUNT.email, password: PASSWORD };
    const plain = (await ask(signIn, 'POST', { json })).headers.get('set-cookie') ?? '';
    expect(plain).toMatch(/^slackwater_session=/);
    expect(plain).toContain('HttpOnly');
    expect(plain).toContain('SameSite=Lax');
    expect(plain).not.toContain('Secure');
    vi.stubEnv('PUBLIC_URL', 'https://slackwater.example');
    const secure = (await ask(signIn, 'POST', { json })).headers.get('set-cookie') ?? '';
    vi.unstubAllEnvs();
    expect(secure).toMatch(/^__Host-slackwater_session=/);
    expect(secure).toContain('Secure');
    expect(secure).toContain('Path=/');
    expect(secure).not.toContain('Domain');
  });
});

describe('a wrong password', () => {
  const place = { 'x-forwarded-for': '203.0.113.9, 198.51.100.20' };
  const attempt = (password: string, headers: Record<string, string> = place, email = ACCOUNT.email) =>
    ask(signIn, 'POST', { json: { email, password }, headers });

  it('tells how many tries are left, then when to come back; the right one is refused as well by then', async () => {
    const left: (number | undefined)[] = [];
    for (let count = 0; count < 5; count++) {
      const response = await attempt('wrong');
      expect(response.status).toBe(401);
      left.push((await problemOf(response)).triesLeft);
    }
    expect(left).toEqual([4, 3, 2, 1, 0]);
    const refused = await attempt(PASSWORD);
    expect(refused.status).toBe(429);
    expect(Number(refused.headers.get('retry-after'))).toBeGreaterThan(800);
    expect((await problemOf(refused)).detail).toMatch(/minutes/);
  });
  it('from elsewhere does not shut the person out', async () => {
    expect((await attempt(PASSWORD, { 'x-forwarded-for': '198.51.100.21' })).status).toBe(204);
  });
  it('is forgotten once the right one is given', async () => {
    const here = { 'x-forwarded-for': '198.51.100.22' };
    await attempt('wrong', here);
    await attempt('wrong', here);
    expect((await attempt(PASSWORD, here)).status).toBe(204);
    expect(await problemOf(await attempt('wrong', here))).toMatchObject({ triesLeft: 4 });
  });
  it('of an unknown address is answered in the same words', async () => {
    const here = { 'x-forwarded-for': '198.51.100.23' };
    const known = await problemOf(await attempt('wrong', here));
    const unknown = await problemOf(await attempt('wrong', here, 'nobody@test.example'));
    expect(unknown.detail).toBe(known.detail);
  });
  it('leaves no address in the table of counters', async () => {
    const { rows } = await api.owner.query<{ key: string }>(`select key from rate_limit`);
    expect(rows.length).toBeGreaterThan(0);
    expect(rows.filter((row) => row.key.includes('@'))).toEqual([]);
  });
});

describe('me', () => {
  it('needs sign-in', async () => {
    const response = await ask(readMe, 'GET');
    expect(response.status).toBe(401);
    expect(response.headers.get('content-type')).toBe('application/problem+json');
    expect(await problemOf(response)).toMatchObject({ status: 401, title: 'Not signed in', detail: 'Sign in first.' });
  });
  it('keeps the unit preference', async () => {
    const person = await makePerson(api, [[await makeOrganization(api), 'operator']]);
    const changed = await ask(patchMe, 'PATCH', { cookie: person.cookie, json: { unitSystem: 'si' } });
    expect(changed.status).toBe(200);
    expect(await (await ask(readMe, 'GET', { cookie: person.cookie })).json()).toMatchObject({ unitSystem: 'si' });
  });
  it('is not changed from another site', async () => {
    const person = await makePerson(api, []);
    const foreign = {
      cookie: person.cookie,
      json: { unitSystem: 'si' },
      headers: { origin: 'https://elsewhere.example' },
    };
    expect((await ask(patchMe, 'PATCH', foreign)).status).toBe(403);
    const silent = await patchMe(
      new Request('http://localhost/api/v1/me', {
        method: 'PATCH',
        headers: { cookie: person.cookie, 'content-type': 'application/json' },
        body: '{"unitSystem":"si"}',
      }),
    );
    expect(silent.status).toBe(403);
    expect(await (await ask(readMe, 'GET', { cookie: person.cookie })).json()).toMatchObject({ unitSystem: 'ip' });
  });
});

describe('a body', () => {
  const raw = (body: string, type = 'application/json') =>
    signIn(new Request('http://localhost/api/v1/session', { method: 'POST', headers: { 'content-type': type }, body }));
  it('that is not JSON is a 400, of another type a 415, too large a 413', async () => {
    expect((await raw('{')).status).toBe(400);
    expect((await raw('email=a', 'application/x-www-form-urlencoded')).status).toBe(415);
    expect((await raw(JSON.stringify({ email: 'x'.repeat(1_100_000) }))).status).toBe(413);
  });
  it('with an unknown shape names every field that is wrong', async () => {
    const response = await raw('{}');
    expect((await problemOf(response)).errors?.map((error) => error.path)).toEqual(['email', 'password']);
  });
});
