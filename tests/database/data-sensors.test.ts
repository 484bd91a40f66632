import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as getSensors } from '@/app/api/v1/plants/[plantId]/sensors/route';
import { DELETE as deleteCheck } from '@/app/api/v1/plants/[plantId]/spot-checks/[spotCheckId]/route';
import { GET as getChecks, POST as postCheck } from '@/app/api/v1/plants/[plantId]/spot-checks/route';
import { computeSlice } from '@/lib/commands/compute-slice';
import { settleAnalyses } from '@/lib/commands/finish-analysis';
import { readSlice } from '@/lib/commands/read-slice';
import { startAnalysis } from '@/lib/commands/start-analysis';
import { writeSlice } from '@/lib/commands/write-slice';
import { withTenant } from '@/lib/db/tenant';
import { Sensors, SpotCheck, SpotCheckMade, SpotCheckRemoved, SpotChecks } from '@/lib/schemas/sensors';
import { ask } from '../support/api';
import { asWorker, DAYS, insertPoint, problemOf, setScene, SLOTS, writeSamples, type Scene } from './data-scene';

let scene: Scene;
const FIRST_DAY = '2026-10-31';

/** Works out every stale day, as the worker would. */
const analyse = () =>
  asWorker(scene, async () => {
    const owner = { organizationId: scene.organizationId, plantId: scene.plantId };
    const inTenant = <Result>(work: Parameters<typeof withTenant<Result>>[1]) =>
      withTenant({ organizationIds: [scene.organizationId] }, work);
    for (;;) {
      const input = await readSlice(owner);
      const result = input && computeSlice(input);
      const state = await inTenant(async (em) => {
        if (input && result) await writeSlice(em, input, result);
        return settleAnalyses(em, owner);
      });
      if (state === 'done') return;
    }
  });

/** Puts findings of the test's own in place of those of the last calibration. */
async function overwrite(findings: readonly Record<string, unknown>[]): Promise<void> {
  const rest = {
    prior: 0.5,
    told: 0.9,
    evidenceHours: 200,
    noise: null,
    increment: 0.1,
  };
  await scene.api.owner.query(
    `update calibration set detail = detail || $2::jsonb
     where plant_id = $1 and valid_from = (select max(valid_from) from calibration where plant_id = $1)`,
    [
      scene.plantId,
      JSON.stringify({
        findings: findings.map((finding) => ({ ...rest, ...finding })),
        chiSquare: { median: 1.7, limit: 6, shareWithin: 0.981 },
        limits: ['common-offset', 'one-way-only'],
      }),
    ],
  );
  // As every change of results does: the answer must not be taken from a copy.
  await scene.api.owner.query(`update plant set results_revision = results_revision + 1 where id = $1`, [
    scene.plantId,
  ]);
}

beforeAll(async () => {
  scene = await setScene();
  const noise = (slot: number, seed: number) => Math.sin(slot * 12.9 + seed * 78.2) / 10;
  const sample = async (role: string, seed: number, value: (slot: number) => number) => {
    const pointId = await insertPoint(scene, role);
    return DAYS.map((day) => ({ pointId, day, value: (slot: number) => value(slot) + noise(slot, seed) }));
  };
  const reverse = (slot: number) => slot > SLOTS / 2;
  await writeSamples(scene, [
    ...(await sample('primarySupplyTemp', 1, () => 44)),
    ...(await sample('secondarySupplyTemp', 2, (slot) => (reverse(slot) ? 47.4 : 44.4))),
    ...(await sample('secondaryReturnTemp', 3, () => 56)),
    ...(await sample('primaryReturnTemp', 4, (slot) => (reverse(slot) ? 56 : 53.3))),
    ...(await sample('primaryFlow', 5, () => 900)),
    ...(await sample('secondaryFlow', 6, (slot) => (slot >= 100 && slot < 148 ? NaN : reverse(slot) ? 1200 : 700))),
    ...(await sample('outdoorTemp', 7, () => 80)),
  ]);
  await scene.api.owner.query(
    `update plant set data_from = '2026-10-31T00:00Z', data_through = '2026-11-02T23:55Z' where id = $1`,
    [scene.plantId],
  );
  await withTenant({ organizationIds: [scene.organizationId] }, (em) =>
    startAnalysis(em, { organizationId: scene.organizationId, plantId: scene.plantId }),
  );
  await analyse();
  await overwrite([
    { role: 'primarySupplyTemp', kind: 'offset', value: -0.1, lo: -0.3, hi: 0.1, tie: 'supplies-agree' },
    { role: 'secondarySupplyTemp', kind: 'offset', value: 0.6, lo: 0.4, hi: 0.8, tie: 'supplies-agree' },
    { role: 'primaryReturnTemp', kind: 'offset', value: 0, lo: -0.8, hi: 0.8, tie: 'none', told: 0 },
    { role: 'primaryFlow', kind: 'gain', value: -2.1, lo: -3.9, hi: -0.4, tie: 'flow-balance', prior: 3 },
    { role: 'secondaryFlow', kind: 'gain', value: -0.6, lo: -2.2, hi: 1.1, tie: 'energy-balance', prior: 3 },
  ]);
});
afterAll(() => scene.api.close());

const get = (query = '', cookie = scene.operator.cookie) =>
  ask(getSensors, 'GET', { path: `/x?${query}`, params: { plantId: scene.plantId }, cookie });
const sensors = async (query?: string) => Sensors.parse(await (await get(query)).json());
const named = (answer: Sensors, role: string) => answer.sensors.find((sensor) => sensor.role === role);

describe('the sensors of a plant', () => {
  it('carry their likely error with its interval, and what the answer did with them', async () => {
    const answer = await sensors();
    expect(named(answer, 'secondarySupplyTemp')).toMatchObject({
      kind: 'offset',
      offsetF: 0.6,
      offsetLoF: 0.4,
      offsetHiF: 0.8,
      gainPercent: null,
      points: ['secondarySupplyTemp 0 0'],
      use: 'corrected',
    });
    expect(named(answer, 'primaryFlow')).toMatchObject({ kind: 'gain', gainPercent: -2.1, use: 'corrected' });
    expect(named(answer, 'primarySupplyTemp')?.use).toBe('used');
    expect(named(answer, 'outdoorTemp')).toMatchObject({ use: 'shown only', kind: null });
    expect(named(answer, 'bypassTemp')).toMatchObject({ points: [], coverage: null, evidence: 'Never sent.' });
  });

  it('are told in sentences with numbers, and what they rest on is named', async () => {
    const answer = await sensors();
    expect(named(answer, 'secondarySupplyTemp')?.evidence).toBe(
      'In 200 hours of clear forward flow the two supplies must agree: it reads 0.6\u00a0±0.2\u00a0°F warm.',
    );
    expect(named(answer, 'primaryReturnTemp')?.evidence).toContain('taken as its class says, within 0.8\u00a0°F');
    expect(named(answer, 'primaryFlow')?.evidence).toContain('2.1\u00a0±1.8\u00a0% low');
    expect(answer.limits.map(({ limit }) => limit)).toEqual(['common-offset', 'one-way-only']);
    expect(answer.limits.every(({ sentence }) => /spot check/.test(sentence))).toBe(true);
    expect(answer.chiSquare).toEqual({ median: 1.7, limit: 6, shareWithin: 0.981 });
    expect(answer.settingsRevision).toBe(1);
    expect(answer.calibration).toMatchObject({ firstDay: '2026-11-01', lastDay: '2026-11-30' });
  });

  it('show the stretches without data and count what arrived, within the period and the record', async () => {
    const answer = await sensors(`from=${FIRST_DAY}T00:00:00Z&to=2026-11-02T00:00:00Z`);
    const flow = named(answer, 'secondaryFlow');
    expect(flow?.stretches.map(({ kind, from, to }) => [kind, from, to])).toEqual([
      ['missing', '2026-10-31T08:20:00Z', '2026-10-31T12:20:00Z'],
      ['missing', '2026-11-01T08:20:00Z', '2026-11-01T12:20:00Z'],
    ]);
    expect(flow?.coverage).toBeCloseTo(1 - 48 / SLOTS, 3);
    // Before the record began and after it ended nothing was to be expected.
    const wide = await sensors('from=2026-10-01&to=2026-12-01');
    expect(named(wide, 'primarySupplyTemp')?.coverage).toBe(1);
  });

  it('come in SI with SI names and sentences', async () => {
    const answer = (await (await get('units=si')).json()) as { sensors: Record<string, unknown>[] };
    const supply = answer.sensors.find((sensor) => sensor.role === 'secondarySupplyTemp');
    expect(supply?.offsetC).toBeCloseTo(0.6 / 1.8, 6);
    expect(supply?.offsetLoC).toBeCloseTo(0.4 / 1.8, 6);
    expect(supply?.priorSigmaC).toBeCloseTo(0.5 / 1.8, 6);
    expect(String(supply?.evidence)).toContain('0.3\u00a0±0.1\u00a0K warm');
    expect(JSON.stringify(answer)).not.toMatch(/°F/);
  });

  it('answer 304 to a current copy, and refuse a period of more than a quarter', async () => {
    const first = await get();
    const again = await ask(getSensors, 'GET', {
      path: '/x?',
      params: { plantId: scene.plantId },
      cookie: scene.operator.cookie,
      headers: { 'if-none-match': first.headers.get('etag') ?? '' },
    });
    expect(again.status).toBe(304);
    expect(await problemOf(await get('from=2026-01-01&to=2026-06-01'))).toMatchObject({ status: 400, paths: ['to'] });
  });

  it('of a plant without a record are all never sent', async () => {
    const empty = await setEmptyPlant();
    const answer = Sensors.parse(
      await (
        await ask(getSensors, 'GET', { path: '/x?', params: { plantId: empty }, cookie: scene.operator.cookie })
      ).json(),
    );
    expect(answer.calibration).toBeNull();
    expect(answer.sensors.every((sensor) => sensor.points.length === 0 && sensor.coverage === null)).toBe(true);
    expect(answer.furtherSensors).toEqual([]);
  });
});

async function setEmptyPlant(): Promise<string> {
  const { rows } = await scene.api.owner.query<{ id: string }>(
    `with made as (
       insert into plant (organization_id, name, time_zone, arrangement, step_minutes)
       values ($1, 'Empty', 'America/Denver', 'primary-secondary', 5) returning id),
     kept as (
       insert into plant_settings (organization_id, plant_id, revision, settings)
       select $1, made.id, 1, (select settings from plant_settings where plant_id = $2 and revision = 1) from made)
     select id from made`,
    [scene.organizationId, scene.plantId],
  );
  return rows[0]?.id ?? '';
}

describe('a spot check', () => {
  const check = { at: '2026-11-01T10:07:00Z', role: 'secondarySupplyTemp', readingF: 44, instrument: 'dry block' };
  const post = (json: object, cookie = scene.engineer.cookie, headers: Record<string, string> = {}) =>
    ask(postCheck, 'POST', { params: { plantId: scene.plantId }, json, cookie, headers });
  const list = async (query = '') =>
    SpotChecks.parse(
      await (
        await ask(getChecks, 'GET', {
          path: `/x?${query}`,
          params: { plantId: scene.plantId },
          cookie: scene.consultant.cookie,
        })
      ).json(),
    ).items;
  const remove = (spotCheckId: string, cookie = scene.engineer.cookie) =>
    ask(deleteCheck, 'DELETE', { params: { plantId: scene.plantId, spotCheckId }, cookie });

  it('is kept with its usual uncertainty, starts an analysis, and shows what the record held beside it', async () => {
    const response = await post(check);
    expect(response.status).toBe(201);
    const made = SpotCheckMade.parse(await response.json());
    expect(made).toMatchObject({ readingF: 44, readingGpm: null, sigmaF: 0.1, shownFrom: 'nowhere' });
    expect(made.analysisId).not.toBeNull();
    const { rows } = await scene.api.owner.query(`select day from stale_day where plant_id = $1`, [scene.plantId]);
    expect(rows).toHaveLength(DAYS.length);
    await analyse();
    const [kept] = await list();
    expect(kept).toMatchObject({ id: made.id, shownFrom: 'record', createdBy: expect.any(String) as string });
    expect(kept?.shownF).toBeCloseTo(44.4, 0);
    const removed = await remove(made.id);
    expect(removed.status).toBe(200);
    expect(SpotCheckRemoved.parse(await removed.json()).analysisId).not.toBeNull();
    expect(await list()).toEqual([]);
    expect((await remove(made.id)).status).toBe(404);
  });

  it('sent twice with one Idempotency-Key is kept once', async () => {
    const headers = { 'idempotency-key': 'check-1' };
    const answers = [await post(check, undefined, headers), await post(check, undefined, headers)];
    const [first, second] = await Promise.all(answers.map(async (each) => SpotCheck.parse(await each.json()).id));
    expect(second).toBe(first);
    expect(await list()).toHaveLength(1);
    await remove(first ?? '');
  });

  it('is listed latest first, in pages, and in SI', async () => {
    const ids: string[] = [];
    for (const hour of ['08', '11', '09']) {
      const made = await post({ ...check, at: `2026-11-01T${hour}:00:00Z` });
      ids.push(SpotCheck.parse(await made.json()).id);
    }
    const [eight, eleven, nine] = ids;
    expect((await list()).map(({ id }) => id)).toEqual([eleven, nine, eight]);
    const page = await ask(getChecks, 'GET', {
      path: '/x?limit=2&units=si',
      params: { plantId: scene.plantId },
      cookie: scene.consultant.cookie,
    });
    const { items, nextCursor } = (await page.json()) as { items: Record<string, number>[]; nextCursor: string };
    expect(items[0]?.readingC).toBeCloseTo(12 / 1.8, 3);
    expect(items[0]?.sigmaC).toBeCloseTo(0.1 / 1.8, 6);
    expect((await list(`limit=2&cursor=${nextCursor}`)).map(({ id }) => id)).toEqual([eight]);
    for (const id of ids) await remove(id);
  });

  it.each([
    ['a temperature without a reading', { ...check, readingF: undefined }, 'readingF'],
    ['a temperature in degrees Celsius', { ...check, readingF: 6.7 }, 'readingF'],
    ['a flow given as a temperature', { ...check, role: 'primaryFlow' }, 'readingGpm'],
    ['a flow at standstill', { at: check.at, role: 'primaryFlow', readingGpm: 0 }, 'readingGpm'],
    ['a reading of tomorrow', { ...check, at: new Date(Date.now() + 864e5).toISOString() }, 'at'],
    ['an uncertainty of nothing', { ...check, sigmaF: 0 }, 'sigmaF'],
    ['an unknown sensor', { ...check, role: 'towerTemp' }, 'role'],
  ])('of %s is refused with words that say what to do', async (_, body, path) => {
    const refused = await problemOf(await post(body));
    expect(refused.status).toBe(400);
    expect(refused.paths).toContain(path);
    expect(refused.detail.length).toBeGreaterThan(20);
  });

  it.each(['consultant', 'operator'] as const)('is the %s’s to read and not to make', async (role) => {
    expect((await post(check, scene[role].cookie)).status).toBe(403);
    expect(await list()).toEqual([]);
  });

  it('of another plant is not found under this one', async () => {
    expect((await remove('00000000-0000-4000-8000-000000000000')).status).toBe(404);
  });
});
