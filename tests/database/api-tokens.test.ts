import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as readMe } from '@/app/api/v1/me/route';
import { GET as readPlant, PATCH as patchPlant } from '@/app/api/v1/plants/[plantId]/route';
import { GET as listPlants, POST as createPlant } from '@/app/api/v1/plants/route';
import { DELETE as revokeToken } from '@/app/api/v1/tokens/[tokenId]/route';
import { GET as listTokens, POST as createToken } from '@/app/api/v1/tokens/route';
import {
  ask,
  LEAST_PLANT,
  makeOrganization,
  makePerson,
  makeToken,
  startTestApi,
  type Person,
  type TestApi,
} from '../support/api';

let api: TestApi;
let here: string;
let engineer: Person;
let operator: Person;
let plantId: string;
let otherPlantId: string;
beforeAll(async () => {
  api = await startTestApi();
  here = await makeOrganization(api);
  engineer = await makePerson(api, [[here, 'engineer']]);
  operator = await makePerson(api, [[here, 'operator']]);
  const make = async () =>
    ((await (await ask(createPlant, 'POST', { json: LEAST_PLANT, cookie: engineer.cookie })).json()) as { id: string })
      .id;
  [plantId, otherPlantId] = [await make(), await make()];
});
afterAll(() => api.close());

const make = (json: object, person = engineer) => ask(createToken, 'POST', { json, cookie: person.cookie });
const read = (id: string, token: string) => ask(readPlant, 'GET', { params: { plantId: id }, token });

describe('a token', () => {
  it('is shown once, works, is listed without its secret, and is kept by hash', async () => {
    const response = await make({ name: 'nightly', scope: 'read' });
    expect(response.status).toBe(201);
    const { id, token } = (await response.json()) as { id: string; token: string };
    expect((await read(plantId, token)).status).toBe(200);
    const list = await (await ask(listTokens, 'GET', { cookie: engineer.cookie })).text();
    expect(list).toContain(id);
    expect(list).not.toContain(token);
    expect(JSON.parse(list)).toMatchObject({ items: [{ name: 'nightly', scope: 'read', plantId: null }] });
    const { rows } = await api.owner.query<{ row: string; hash: string }>(
      `select t::text as row, encode(token_hash, 'hex') as hash from api_token t where id = $1`,
      [id],
    );
    expect(rows[0]?.row).not.toContain(token);
    expect(rows[0]?.hash).toHaveLength(64);
  });
  it('stops at once when revoked, and revoking it again finds nothing', async () => {
    const { id, token } = (await (await make({ name: 'short', scope: 'read' })).json()) as {
      id: string;
      token: string;
    };
    const revoke = () => ask(revokeToken, 'DELETE', { params: { tokenId: id }, cookie: engineer.cookie });
    expect((await revoke()).status).toBe(204);
    const refused = await read(plantId, token);
    expect(refused.status).toBe(401);
    expect(refused.headers.get('www-authenticate')).toBe('Bearer');
    expect((await revoke()).status).toBe(404);
  });
  it('stops when it expires, and cannot be made expired', async () => {
    const { id, token } = (await (
      await make({ name: 'brief', scope: 'read', expiresAt: new Date(Date.now() + 60_000).toISOString() })
    ).json()) as { id: string; token: string };
    expect((await read(plantId, token)).status).toBe(200);
    await api.owner.query(`update api_token set expires_at = now() where id = $1`, [id]);
    expect((await read(plantId, token)).status).toBe(401);
    const late = await make({ name: 'late', scope: 'read', expiresAt: '2020-01-01T00:00:00Z' });
    expect(await late.json()).toMatchObject({ status: 400, errors: [{ path: 'expiresAt' }] });
  });
  it('nobody made is refused, and so is a session’s secret in its place', async () => {
    expect((await read(plantId, 'slw_nonsense')).status).toBe(401);
    expect((await read(plantId, engineer.cookie.split('=')[1] ?? '')).status).toBe(401);
  });
  it('wins over a cookie sent beside it', async () => {
    const token = await makeToken(api, here, 'read');
    const both = await ask(patchPlant, 'PATCH', {
      params: { plantId },
      json: { name: 'X' },
      token,
      cookie: engineer.cookie,
    });
    expect(both.status).toBe(403);
  });
  it('is made by owners and engineers only, and by no other token', async () => {
    expect((await make({ name: 'x', scope: 'read' }, operator)).status).toBe(403);
    const manage = await makeToken(api, here, 'manage');
    expect((await ask(createToken, 'POST', { json: { name: 'x', scope: 'manage' }, token: manage })).status).toBe(403);
    expect((await ask(listTokens, 'GET', { cookie: operator.cookie })).status).toBe(403);
  });
  it('to upload belongs to a plant of the organization', async () => {
    expect((await make({ name: 'x', scope: 'ingest' })).status).toBe(400);
    expect((await make({ name: 'x', scope: 'ingest', plantId })).status).toBe(201);
    const foreign = await makePerson(api, [[await makeOrganization(api), 'engineer']]);
    expect((await make({ name: 'x', scope: 'ingest', plantId }, foreign)).status).toBe(404);
  });
  it('of another organization is not there to revoke', async () => {
    const foreign = await makePerson(api, [[await makeOrganization(api), 'owner']]);
    const { id } = (await (await make({ name: 'mine', scope: 'read' })).json()) as { id: string };
    expect((await ask(revokeToken, 'DELETE', { params: { tokenId: id }, cookie: foreign.cookie })).status).toBe(404);
  });
  it('is not a person', async () => {
    expect((await ask(readMe, 'GET', { token: await makeToken(api, here, 'manage') })).status).toBe(403);
  });
});

describe('the scope of a token', () => {
  it('read: reads and changes nothing', async () => {
    const token = await makeToken(api, here, 'read');
    expect((await read(plantId, token)).status).toBe(200);
    expect((await ask(patchPlant, 'PATCH', { params: { plantId }, json: { name: 'X' }, token })).status).toBe(403);
    expect((await ask(createPlant, 'POST', { json: LEAST_PLANT, token })).status).toBe(403);
  });
  it('manage: changes without an Origin', async () => {
    const token = await makeToken(api, here, 'manage');
    const response = await ask(patchPlant, 'PATCH', { params: { plantId }, json: { name: 'By script' }, token });
    expect(response.status).toBe(200);
  });
  it('ingest: neither lists nor reads plants', async () => {
    const token = await makeToken(api, here, 'ingest', plantId);
    expect((await ask(listPlants, 'GET', { token })).status).toBe(403);
    expect((await read(plantId, token)).status).toBe(403);
  });
  it('of one plant: no other plant is there', async () => {
    for (const scope of ['read', 'manage', 'ingest'] as const) {
      const token = await makeToken(api, here, scope, plantId);
      expect((await read(otherPlantId, token)).status).toBe(404);
    }
    const token = await makeToken(api, here, 'read', plantId);
    const list = (await (await ask(listPlants, 'GET', { token })).json()) as { items: { id: string }[] };
    expect(list.items.map((plant) => plant.id)).toEqual([plantId]);
  });
});
