import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { DELETE as removePlant, GET as readPlant, PATCH as patchPlant } from '@/app/api/v1/plants/[plantId]/route';
import { GET as listPlants, POST as createPlant } from '@/app/api/v1/plants/route';
import { Plant } from '@/lib/schemas/plant';
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
let owner: Person;
let engineer: Person;
let consultant: Person;
let operator: Person;
beforeAll(async () => {
  api = await startTestApi();
  here = await makeOrganization(api, 'Here');
  const there = await makeOrganization(api, 'There');
  owner = await makePerson(api, [[here, 'owner']]);
  engineer = await makePerson(api, [[here, 'engineer']]);
  consultant = await makePerson(api, [
    [here, 'consultant'],
    [there, 'engineer'],
  ]);
  operator = await makePerson(api, [[here, 'operator']]);
});
afterAll(() => api.close());

type Record_ = Record<string, unknown>;
const make = async (json: object = LEAST_PLANT, person = engineer): Promise<Plant> =>
  Plant.parse(await (await ask(createPlant, 'POST', { json, cookie: person.cookie })).json());
const read = (id: string, person = engineer) =>
  ask(readPlant, 'GET', { params: { plantId: id }, cookie: person.cookie });
const patch = (id: string, json: object, person = engineer) =>
  ask(patchPlant, 'PATCH', { params: { plantId: id }, json, cookie: person.cookie });
/** Samples as an import leaves them, as far as a change of settings is concerned. */
const addSamples = async (id: string) => {
  const values = [here, id, '2026-07-01', '6f9619ff-8b86-4d01-b42d-00cf4fc964ff'];
  await api.owner.query(
    `insert into sample_layer (organization_id, plant_id, day, point_id, upload_seq, step, v) values ($1, $2, $3, $4, 1, 5, '{1}')`,
    values,
  );
  await api.owner.query(
    `insert into sample_block (organization_id, plant_id, day, point_id, step, v, lo, mean, hi) values ($1, $2, $3, $4, 5, '{1}', '{1}', '{1}', '{1}')`,
    values,
  );
};

describe('making a plant', () => {
  it('takes the least there is and marks every default as assumed', async () => {
    const response = await ask(createPlant, 'POST', { json: LEAST_PLANT, cookie: engineer.cookie });
    expect(response.status).toBe(201);
    const plant = Plant.parse(await response.json());
    expect(plant).toMatchObject({
      name: 'North energy centre',
      organizationId: here,
      organizationName: 'Here',
      stepMinutes: 5,
      settingsRevision: 1,
      tariff: null,
      dataThrough: null,
    });
    expect(plant.assumed).toEqual(
      expect.arrayContaining(['design.loadDeltaTF', 'design.productionUnits.0.minFlowGpm']),
    );
    // The default least flow of a unit is half of its design flow.
    expect(plant.design.productionUnits[0]?.minFlowGpm).toBe(450);
    expect(plant.sensors.primaryFlow?.sigmaPercent).toBeGreaterThan(0);
    expect(plant.assumed).not.toContain('design.productionUnits.0.flowGpm');
  });
  it('starts with the default alert rule and an entry in the audit trail', async () => {
    const { id } = await make();
    const rule = await api.owner.query(`select enabled, min_reverse_minutes from alert_rule where plant_id = $1`, [id]);
    expect(rule.rows).toEqual([{ enabled: true, min_reverse_minutes: 30 }]);
    const audit = await api.owner.query(`select action, actor_user_id from audit_event where subject_id = $1`, [id]);
    expect(audit.rows).toEqual([{ action: 'plant.created', actor_user_id: engineer.userId }]);
  });
  it.each([
    ['a zone nobody knows', { ...LEAST_PLANT, timeZone: 'Mars/Olympus' }, 'timeZone'],
    ['no units', { ...LEAST_PLANT, design: { ...LEAST_PLANT.design, productionUnits: [] } }, 'design.productionUnits'],
    [
      'a unit with neither flow nor delta-T',
      { ...LEAST_PLANT, design: { productionSupplyF: 44, productionUnits: [{ name: 'A', tons: 1 }] } },
      'design.productionUnits.0.flowGpm',
    ],
    ['a bridge without its blend', { ...LEAST_PLANT, arrangement: 'building-bridge' }, 'design.blendedSupplyF'],
  ])('refuses %s and says where', async (_, json, path) => {
    const response = await ask(createPlant, 'POST', { json, cookie: engineer.cookie });
    expect(response.status).toBe(400);
    const problem = (await response.json()) as { errors: { path: string; message: string }[] };
    expect(problem.errors.map((error) => error.path)).toContain(path);
    expect(JSON.stringify(problem)).not.toMatch(/zod|invalid_type|at \w+\.ts/i);
  });
  it.each(['consultant', 'operator'] as const)('is refused to a %s', async (role) => {
    const person = { consultant, operator }[role];
    const json = { ...LEAST_PLANT, organizationId: here };
    expect((await ask(createPlant, 'POST', { json, cookie: person.cookie })).status).toBe(403);
  });
  it('asks which organization when there are several, and knows no foreign one', async () => {
    const unnamed = await ask(createPlant, 'POST', { json: LEAST_PLANT, cookie: consultant.cookie });
    expect(unnamed.status).toBe(400);
    expect(await unnamed.json()).toMatchObject({ errors: [{ path: 'organizationId' }] });
    const foreign = await makeOrganization(api);
    const json = { ...LEAST_PLANT, organizationId: foreign };
    expect((await ask(createPlant, 'POST', { json, cookie: engineer.cookie })).status).toBe(404);
  });
});

describe('listing plants', () => {
  it('goes by name, page by page, without gaps or repeats, and shows nothing foreign', async () => {
    const organization = await makeOrganization(api);
    const person = await makePerson(api, [[organization, 'engineer']]);
    const names = ['Delta', 'alpha', 'Bravo', 'Charlie', 'Bravo'];
    for (const name of names) await make({ ...LEAST_PLANT, name }, person);
    const seen: Plant[] = [];
    let cursor: string | null = null;
    do {
      const path = `/plants?limit=2${cursor === null ? '' : `&cursor=${cursor}`}`;
      const response = await ask(listPlants, 'GET', { path, cookie: person.cookie });
      const page = (await response.json()) as { items: Plant[]; nextCursor: string | null };
      expect(page.items.length).toBeLessThanOrEqual(2);
      seen.push(...page.items);
      cursor = page.nextCursor;
    } while (cursor !== null);
    expect(seen.map((plant) => plant.name).sort()).toEqual([...names].sort());
    expect(new Set(seen.map((plant) => plant.id)).size).toBe(5);
    expect(new Set(seen.map((plant) => plant.organizationId))).toEqual(new Set([organization]));
  });
  it('refuses a limit beyond 500 and a cursor that is not one', async () => {
    for (const query of ['limit=501', 'limit=0', 'cursor=nonsense'])
      expect((await ask(listPlants, 'GET', { path: `/plants?${query}`, cookie: owner.cookie })).status).toBe(400);
  });
});

describe('reading a plant', () => {
  it('is open to every role', async () => {
    const { id } = await make();
    for (const person of [owner, engineer, consultant, operator]) expect((await read(id, person)).status).toBe(200);
  });
  it('in SI renames what carries a unit', async () => {
    const { id } = await make();
    const response = await ask(readPlant, 'GET', {
      path: `/plants/${id}?units=si`,
      params: { plantId: id },
      cookie: engineer.cookie,
    });
    const { design } = (await response.json()) as { design: Record_ & { productionUnits: Record_[] } };
    expect(design.productionSupplyC).toBeCloseTo(6.6667, 3);
    expect(design.productionUnits[0]).toHaveProperty('flowLs');
    expect(design).not.toHaveProperty('productionSupplyF');
  });
});

describe('changing a plant', () => {
  it('merges, makes a revision, keeps the old one, and takes a confirmed number off the assumed', async () => {
    const before = await make();
    const response = await patch(before.id, {
      design: { loadDeltaTF: 14 },
      tariff: { currency: 'USD', energyPerKwh: 0.14 },
    });
    expect(response.status).toBe(200);
    const after = Plant.parse(await response.json());
    expect(after.settingsRevision).toBe(2);
    expect(after.design.loadDeltaTF).toBe(14);
    expect(after.design.productionUnits[0]?.name).toBe('CH-1');
    expect(after.assumed).not.toContain('design.loadDeltaTF');
    const revisions = await api.owner.query<{ revision: number; delta: string | null }>(
      `select revision, settings #>> '{design,loadDeltaTF}' as delta from plant_settings where plant_id = $1 order by revision`,
      [before.id],
    );
    expect(revisions.rows).toEqual([
      { revision: 1, delta: null },
      { revision: 2, delta: '14' },
    ]);
  });
  it('of one value leaves every other as it was', async () => {
    const { id } = await make({ ...LEAST_PLANT, tariff: { currency: 'EUR', energyPerKwh: 0.2 }, stepMinutes: 15 });
    const after = Plant.parse(await (await patch(id, { low: { loadShare: 0.2 } })).json());
    expect(after).toMatchObject({
      tariff: { currency: 'EUR' },
      stepMinutes: 15,
      low: { loadShare: 0.2, deltaTShare: 0.8 },
    });
  });
  it('to null takes a value back', async () => {
    const { id } = await make({ ...LEAST_PLANT, tariff: { currency: 'EUR', energyPerKwh: 0.2 } });
    expect(Plant.parse(await (await patch(id, { tariff: null })).json()).tariff).toBeNull();
  });
  it('of the name alone makes no revision; of nothing neither', async () => {
    const { id } = await make();
    expect(await (await patch(id, { name: 'South' })).json()).toMatchObject({ name: 'South', settingsRevision: 1 });
    expect(await (await patch(id, {})).json()).toMatchObject({ settingsRevision: 1, analysisId: null });
  });
  it('has the stored days analysed again', async () => {
    const { id } = await make();
    await addSamples(id);
    const after = (await (await patch(id, { low: { loadShare: 0.1 } })).json()) as { analysisId: string };
    const analysis = await api.owner.query(`select status, days_total, settings_revision from analysis where id = $1`, [
      after.analysisId,
    ]);
    expect(analysis.rows).toEqual([{ status: 'queued', days_total: 1, settings_revision: 2 }]);
    const jobs = await api.owner.query(
      `select 1 from pgboss.job where name = 'analyse-plant' and data ->> 'plantId' = $1`,
      [id],
    );
    expect(jobs.rowCount).toBe(1);
  });
  it('of the step is refused once there is data, allowed before', async () => {
    const { id } = await make();
    expect(await (await patch(id, { stepMinutes: 15 })).json()).toMatchObject({ stepMinutes: 15 });
    await addSamples(id);
    const refused = await patch(id, { stepMinutes: 5 });
    expect(refused.status).toBe(409);
    expect(await refused.json()).toMatchObject({ detail: expect.stringContaining('15 min') as string });
    expect((await patch(id, { timeZone: 'Europe/Berlin' })).status).toBe(200);
  });
  it('into what no plant can be is refused and changes nothing', async () => {
    const { id } = await make();
    expect((await patch(id, { design: { productionUnits: [] } })).status).toBe(400);
    expect((await patch(id, { design: null })).status).toBe(400);
    expect((await patch(id, { arrangement: 'building-bridge' })).status).toBe(400);
    expect(await (await read(id)).json()).toMatchObject({ settingsRevision: 1, arrangement: 'primary-secondary' });
  });
  it('at the same time by two makes two revisions and loses neither', async () => {
    const { id } = await make();
    const statuses = await Promise.all([
      patch(id, { design: { loadDeltaTF: 13 } }),
      patch(id, { design: { loadTons: 800 } }),
    ]);
    expect(statuses.map((response) => response.status)).toEqual([200, 200]);
    const after = Plant.parse(await (await read(id)).json());
    expect(after).toMatchObject({ settingsRevision: 3, design: { loadDeltaTF: 13, loadTons: 800 } });
  });
  it('is refused to those who may only read', async () => {
    const { id } = await make();
    for (const person of [consultant, operator]) expect((await patch(id, { name: 'X' }, person)).status).toBe(403);
  });
});

describe('taking a plant away', () => {
  it('is the owner’s, hides it everywhere and ends its tokens', async () => {
    const { id } = await make();
    const token = await makeToken(api, here, 'read', id);
    const remove = (person: Person) => ask(removePlant, 'DELETE', { params: { plantId: id }, cookie: person.cookie });
    expect((await remove(engineer)).status).toBe(403);
    expect((await remove(owner)).status).toBe(204);
    expect((await read(id)).status).toBe(404);
    expect((await remove(owner)).status).toBe(404);
    expect((await ask(readPlant, 'GET', { params: { plantId: id }, token })).status).toBe(401);
    const kept = await api.owner.query(`select 1 from plant where id = $1 and deleted_at is not null`, [id]);
    expect(kept.rowCount).toBe(1);
  });
});
