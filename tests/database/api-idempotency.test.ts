import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { POST as createPlant } from '@/app/api/v1/plants/route';
import { POST as createToken } from '@/app/api/v1/tokens/route';
import type { Access } from '@/lib/auth/access';
import { withTenant } from '@/lib/db/tenant';
import { claimIdempotencyKey, idempotent } from '@/lib/http/idempotency';
import { ProblemError } from '@/lib/http/problem';
import {
  ask,
  LEAST_PLANT,
  makeOrganization,
  makePerson,
  startTestApi,
  type Person,
  type TestApi,
} from '../support/api';

let api: TestApi;
let here: string;
let engineer: Person;
beforeAll(async () => {
  api = await startTestApi();
  here = await makeOrganization(api);
  engineer = await makePerson(api, [[here, 'engineer']]);
});
afterAll(() => api.close());

const create = (key: string, json: object = LEAST_PLANT, person = engineer) =>
  ask(createPlant, 'POST', { path: '/plants', json, cookie: person.cookie, headers: { 'idempotency-key': key } });
const countPlants = async (organizationId = here) =>
  Number(
    (
      await api.owner.query<{ n: string }>(`select count(*) as n from plant where organization_id = $1`, [
        organizationId,
      ])
    ).rows[0]?.n,
  );
const request = (key: string, path = '/slow') =>
  new Request(`http://localhost/api/v1${path}`, { method: 'POST', headers: { 'idempotency-key': key } });
const tenancy = () => ({ organizationIds: [here] });

describe('a request sent again with its Idempotency-Key', () => {
  it('gets the stored answer and makes nothing new', async () => {
    const before = await countPlants();
    const first = await create('again');
    const second = await create('again');
    expect([first.status, second.status]).toEqual([201, 201]);
    expect(second.headers.get('idempotency-replayed')).toBe('true');
    expect(await second.json()).toEqual(await first.json());
    expect(await countPlants()).toBe(before + 1);
  });
  it('with another body gets 422', async () => {
    await create('changed');
    const response = await create('changed', { ...LEAST_PLANT, name: 'Another' });
    expect(response.status).toBe(422);
  });
  it('after a refusal is worked on afresh', async () => {
    expect((await create('mended', { ...LEAST_PLANT, timeZone: 'nowhere' })).status).toBe(400);
    expect((await create('mended')).status).toBe(201);
  });
  it('after a day is a new request', async () => {
    const first = (await (await create('old')).json()) as { id: string };
    await api.owner.query(`update idempotency_key set created_at = now() - interval '24 hours 1 second'`);
    const second = (await (await create('old')).json()) as { id: string };
    expect(second.id).not.toBe(first.id);
  });
  it('by another organization, or at another route, is another request', async () => {
    const there = await makeOrganization(api);
    const foreign = await makePerson(api, [[there, 'engineer']]);
    const [mine, theirs] = [await create('shared'), await create('shared', LEAST_PLANT, foreign)];
    expect([mine.status, theirs.status]).toEqual([201, 201]);
    expect(theirs.headers.has('idempotency-replayed')).toBe(false);
    const token = await ask(createToken, 'POST', {
      path: '/tokens',
      json: { name: 'x', scope: 'read' },
      cookie: engineer.cookie,
      headers: { 'idempotency-key': 'shared' },
    });
    expect(token.status).toBe(201);
  });
  it('shows a new token again, and the database cannot be read for it', async () => {
    const again = () =>
      ask(createToken, 'POST', {
        path: '/tokens',
        json: { name: 'once', scope: 'read' },
        cookie: engineer.cookie,
        headers: { 'idempotency-key': 'secret' },
      });
    const first = (await (await again()).json()) as { token: string };
    expect(await (await again()).json()).toEqual(first);
    const { rows } = await api.owner.query<{ row: string }>(`select k::text as row from idempotency_key k`);
    expect(rows.length).toBeGreaterThan(0);
    expect(rows.filter(({ row }) => row.includes(first.token) || row.includes('secret'))).toEqual([]);
  });
  it.each(['', 'ä', 'x'.repeat(256)])('of a form that is none ("%s") is refused', async (key) => {
    const response = await ask(createPlant, 'POST', {
      json: LEAST_PLANT,
      cookie: engineer.cookie,
      headers: { 'idempotency-key': key },
    });
    expect(response.status).toBe(400);
  });
});

describe('a concurrent twin', () => {
  it('gets 409 with Retry-After while the first is at work, and the answer afterwards', async () => {
    let finish = () => {};
    let started = () => {};
    const working = new Promise<void>((resolve) => (started = resolve));
    const gate = new Promise<void>((resolve) => (finish = resolve));
    const body = { a: 1 };
    const run = (work: () => Promise<void>) =>
      withTenant(tenancy(), (em) =>
        idempotent(em, { request: request('twin'), organizationId: here, body }, async () => {
          await work();
          return { status: 201, body: { made: true } };
        }),
      );
    const first = run(async () => {
      started();
      await gate;
    });
    await working;
    const twin = await run(async () => {}).catch((error: unknown) => error);
    expect(twin).toBeInstanceOf(ProblemError);
    expect(twin).toMatchObject({ status: 409, extra: { headers: { 'retry-after': '2' } } });
    finish();
    expect((await first).status).toBe(201);
    const replay = await run(async () => {
      throw new Error('must not work twice');
    });
    expect(await replay.json()).toEqual({ made: true });
  });
  it('of ten plants at once makes exactly one', async () => {
    const before = await countPlants();
    const statuses = (await Promise.all(Array.from({ length: 10 }, () => create('ten')))).map(({ status }) => status);
    expect(statuses.filter((status) => status !== 201 && status !== 409)).toEqual([]);
    expect(statuses).toContain(201);
    expect(await countPlants()).toBe(before + 1);
  });
});

describe('a key held by a streamed request', () => {
  const access = (): Access => ({
    kind: 'token',
    userId: null,
    tokenId: null,
    scope: 'manage',
    ingestPlantId: null,
    onlyPlantId: null,
    memberships: [{ organizationId: here, organizationName: '', role: 'engineer' }],
    organizationIds: [here],
  });
  const claim = (key: string) => claimIdempotencyKey(access(), request(key, '/uploads'), here);

  it('is claimed once, refused to a twin with 409, and answers replays with the body’s hash', async () => {
    const held = await claim('long');
    if (held?.kind !== 'claimed') throw new Error('not claimed');
    await expect(claim('long')).rejects.toMatchObject({ status: 409 });
    await held.touch();
    await withTenant(tenancy(), (em) => held.settle(em, 'hash of the file', { status: 202, body: { id: 'u1' } }));
    const replay = await claim('long');
    if (replay?.kind !== 'replay') throw new Error('not a replay');
    expect(replay.bodyHash).toBe('hash of the file');
    expect(replay.response().status).toBe(202);
    expect(await replay.response().json()).toEqual({ id: 'u1' });
  });
  it('is free again after an aborted upload', async () => {
    const held = await claim('aborted');
    if (held?.kind !== 'claimed') throw new Error('not claimed');
    await held.free();
    expect((await claim('aborted'))?.kind).toBe('claimed');
  });
  it('is free again when its process has died', async () => {
    await claim('crashed');
    await api.owner.query(`update idempotency_key set created_at = now() - interval '3 minutes' where status is null`);
    expect((await claim('crashed'))?.kind).toBe('claimed');
  });
  it('is not asked for without the header', async () => {
    const bare = new Request('http://localhost/api/v1/uploads', { method: 'POST' });
    expect(await claimIdempotencyKey(access(), bare, here)).toBeNull();
  });
});
