import { readdir } from 'node:fs/promises';
import path from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { POST as createPlant } from '@/app/api/v1/plants/route';
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

const ROOT = 'app/api/v1';
const METHODS = ['GET', 'POST', 'PUT', 'PATCH', 'DELETE'] as const;
type Handler = Parameters<typeof ask>[0];

/** What a valid request to a route needs beyond its path, so that the answer tells of the object and not of the input. */
const QUERIES: Record<string, string> = {
  'plants/[plantId]/series': '?from=2026-07-01&to=2026-07-02&points=primaryFlow',
  'plants/[plantId]/uploads': '?filename=week.csv',
};
const BODIES: Record<string, object> = {
  'PATCH plants/[plantId]': { name: 'Mine now' },
  'PUT plants/[plantId]/alert-rule': { enabled: false },
  'POST plants/[plantId]/alerts/runs': { day: '2026-07-01' },
  'POST plants/[plantId]/analyses': {},
  'POST plants/[plantId]/spot-checks': { at: '2026-07-01T10:00:00Z', role: 'primarySupplyTemp', readingF: 44 },
  'PATCH episodes/[episodeId]': { acknowledged: true },
  'PUT uploads/[uploadId]/mapping': {
    timestamp: { columns: ['Time'], form: 'iso' },
    timeZone: 'America/Denver',
    columns: [{ column: 'A', role: 'ignore', unit: null }],
    remember: false,
  },
};

/** Every method of every route whose path names a tenant's object. */
async function tenantRoutes(): Promise<{ name: string; place: string; method: string; handler: Handler }[]> {
  const files = (await readdir(ROOT, { recursive: true })).filter(
    (file) => path.basename(file) === 'route.ts' && /\[(plant|upload|episode|token)Id\]/.test(file),
  );
  const routes: { name: string; place: string; method: string; handler: Handler }[] = [];
  for (const file of files.sort()) {
    const loaded = (await import(path.resolve(ROOT, file))) as Record<string, Handler | undefined>;
    const place = path.dirname(file);
    for (const method of METHODS) {
      const handler = loaded[method];
      if (handler) routes.push({ name: `${method} ${place}`, place, method, handler });
    }
  }
  return routes;
}
const ROUTES = await tenantRoutes();

let api: TestApi;
let foreign: Person;
let foreignToken: string;
let ids: Record<string, string>;
beforeAll(async () => {
  api = await startTestApi();
  const here = await makeOrganization(api);
  const there = await makeOrganization(api);
  const engineer = await makePerson(api, [[here, 'engineer']]);
  foreign = await makePerson(api, [[there, 'owner']]);
  foreignToken = await makeToken(api, there, 'manage');
  const made = await ask(createPlant, 'POST', { json: LEAST_PLANT, cookie: engineer.cookie });
  const plantId = ((await made.json()) as { id: string }).id;
  const insert = async (text: string): Promise<string> =>
    (await api.owner.query<{ id: string }>(`${text} returning id`, [here, plantId])).rows[0]?.id ?? '';
  ids = {
    plantId,
    uploadId: await insert(`insert into upload (organization_id, plant_id, filename) values ($1, $2, 'week.csv')`),
    analysisId: await insert(
      `insert into analysis (organization_id, plant_id, kernel_version, settings_revision) values ($1, $2, '1', 1)`,
    ),
    episodeId: await insert(
      `insert into episode (organization_id, plant_id, cause, started_at, ended_at, hours, worst_hour)
       values ($1, $2, 'reverse-flow', '2026-07-01T10:00Z', '2026-07-01T12:00Z', 2, '2026-07-01T10:00Z')`,
    ),
    spotCheckId: await insert(
      `insert into spot_check (organization_id, plant_id, at, role, reading, sigma)
       values ($1, $2, '2026-07-01T10:00Z', 'primarySupplyTemp', 44, 0.1)`,
    ),
    tokenId: await insert(
      `insert into api_token (organization_id, plant_id, name, scope, token_hash) values ($1, $2, 'x', 'read', '\\x01')`,
    ),
    hourStart: '2026-07-01T10:00:00Z',
  };
});
afterAll(() => api.close());

const request = (route: (typeof ROUTES)[number], who: { cookie?: string; token?: string }, given = ids) => {
  const params = Object.fromEntries(
    [...route.place.matchAll(/\[(\w+)\]/g)].map(([, name = '']) => [name, given[name] ?? '']),
  );
  const url = route.place.replace(/\[(\w+)\]/g, (_, name: string) => encodeURIComponent(params[name] ?? ''));
  const json = BODIES[route.name];
  return ask(route.handler, route.method, {
    path: `/${url}${QUERIES[route.place] ?? ''}`,
    params,
    ...(json === undefined ? {} : { json }),
    ...who,
  });
};

describe('another organization’s object', () => {
  it('is looked for in every route there is', () => {
    expect(ROUTES.length).toBeGreaterThan(8);
  });
  it.each(ROUTES.map((route) => [route.name, route] as const))('%s: is a 404 for a person', async (_, route) => {
    const response = await request(route, { cookie: foreign.cookie });
    expect(response.status).toBe(404);
    expect(response.headers.get('content-type')).toBe('application/problem+json');
  });
  it.each(ROUTES.map((route) => [route.name, route] as const))('%s: is no success for a token', async (_, route) => {
    const response = await request(route, { token: foreignToken });
    expect([403, 404]).toContain(response.status);
  });
  it.each(ROUTES.map((route) => [route.name, route] as const))('%s: needs sign-in', async (_, route) => {
    expect((await request(route, {})).status).toBe(401);
  });
  it.each(ROUTES.map((route) => [route.name, route] as const))('%s: an id of no form is a 404', async (_, route) => {
    const mangled = Object.fromEntries(Object.keys(ids).map((name) => [name, `x' or '1'='1`]));
    expect((await request(route, { cookie: foreign.cookie }, mangled)).status).toBe(404);
  });
  it('is untouched by all of this', async () => {
    const { rows } = await api.owner.query(
      `select p.name, p.deleted_at, p.settings_revision, r.enabled, e.acknowledged_at, t.revoked_at,
         (select count(*)::integer from spot_check) as checks
       from plant p join alert_rule r on r.plant_id = p.id join episode e on e.plant_id = p.id join api_token t on t.plant_id = p.id`,
    );
    expect(rows).toEqual([
      {
        name: LEAST_PLANT.name,
        deleted_at: null,
        settings_revision: 1,
        enabled: true,
        acknowledged_at: null,
        revoked_at: null,
        checks: 1,
      },
    ]);
  });
});
