import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as readOverview } from '@/app/api/v1/overview/route';
import { POST as createPlant } from '@/app/api/v1/plants/route';
import { addDays } from '@/lib/db/days';
import { RESULT_CHANNELS } from '@/lib/hydronics/types';
import { localDayOf, localDayStart } from '@/lib/queries/local-time';
import { OverviewPlant } from '@/lib/schemas/overview';
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

const ZONE = 'America/Denver';
const HOUR_MS = 3_600_000;
const YESTERDAY = addDays(localDayOf(Date.now(), ZONE), -1);

let api: TestApi;
let here: string;
let there: string;
let engineer: Person;
let consultant: Person;
const ids: Record<string, string> = {};

const make = async (name: string, organizationId: string, more: object = {}) => {
  const json = { ...LEAST_PLANT, name, organizationId, ...more };
  const response = await ask(createPlant, 'POST', { json, cookie: consultant.cookie });
  ids[name] = ((await response.json()) as { id: string }).id;
};
const setThrough = (name: string, instantMs: number) =>
  api.owner.query(`update plant set data_from = $2, data_through = $2 where id = $1`, [
    ids[name],
    new Date(instantMs).toISOString(),
  ]);
const addDay = (name: string, day: string, values: Record<string, number | string | null> = {}) => {
  const row = {
    reverse_minutes: 0,
    unknown_minutes: 0,
    running_minutes: 1440,
    low_hours: 0,
    warmest_supply_f: 44,
    ...values,
  };
  const columns = Object.keys(row);
  return api.owner.query(
    `insert into plant_day (organization_id, plant_id, day, ${columns.join(', ')})
     select organization_id, id, $2, ${columns.map((_, index) => `$${index + 3}`).join(', ')} from plant where id = $1`,
    [ids[name], day, ...Object.values(row)],
  );
};
const addHour = (name: string, startMs: number, values: Record<string, number | string | boolean | null> = {}) => {
  const row = {
    low: false,
    running_minutes: 60,
    reverse_minutes: 0,
    forward_minutes: 60,
    still_minutes: 0,
    unknown_minutes: 0,
    cause: 'none',
    ...values,
  };
  const columns = Object.keys(row);
  return api.owner.query(
    `insert into hour (organization_id, plant_id, hour_start, local_day, ${columns.join(', ')})
     select organization_id, id, $2, $3, ${columns.map((_, index) => `$${index + 4}`).join(', ')} from plant where id = $1`,
    [ids[name], new Date(startMs).toISOString(), localDayOf(startMs, ZONE), ...Object.values(row)],
  );
};
const overview = async (person = consultant, query = '') => {
  const response = await ask(readOverview, 'GET', { path: `/overview${query}`, cookie: person.cookie });
  return (await response.json()) as { items: OverviewPlant[]; nextCursor: string | null };
};
const plantNamed = async (name: string) => {
  const found = (await overview()).items.find((plant) => plant.name === name);
  if (!found) throw new Error(`no plant ${name}`);
  return found;
};

beforeAll(async () => {
  api = await startTestApi();
  here = await makeOrganization(api, 'Here');
  there = await makeOrganization(api, 'There');
  engineer = await makePerson(api, [[here, 'engineer']]);
  consultant = await makePerson(api, [
    [here, 'engineer'],
    [there, 'engineer'],
  ]);
  await make('Silent', here);
  await make('Backwards', here, { tariff: { currency: 'USD', energyPerKwh: 0.1 } });
  await make('Calm', there);
  await make('New', there);
  const midnight = localDayStart(addDays(YESTERDAY, 1), ZONE);
  await setThrough('Silent', midnight - 50 * HOUR_MS);
  await setThrough('Backwards', midnight - 300_000);
  await setThrough('Calm', midnight - 300_000);
  await addDay('Calm', YESTERDAY);
  await addDay('Backwards', YESTERDAY, {
    reverse_minutes: 200,
    excess_cost: 10,
    low_hours: 5,
    warmest_supply_f: 49,
    largest_reverse_flow_gpm: 262,
  });
  await addDay('Backwards', addDays(YESTERDAY, -6), { reverse_minutes: 20, excess_cost: 5, low_hours: 2 });
  await addDay('Backwards', addDays(YESTERDAY, -7), { reverse_minutes: 999, excess_cost: 999, low_hours: 9 });
});
afterAll(() => api.close());

describe('the overview', () => {
  it('puts first what to look at first, over all organizations of the person', async () => {
    const { items, nextCursor } = await overview();
    expect(items.map((plant) => [plant.rank, plant.name, plant.ground])).toEqual([
      [1, 'Backwards', 'reverse'],
      [2, 'Calm', 'calm'],
      [3, 'Silent', 'silence'],
      [4, 'New', 'no-data'],
    ]);
    expect(nextCursor).toBeNull();
    for (const item of items) expect(OverviewPlant.safeParse(item).error).toBeUndefined();
  });
  it('shows nobody another organization’s plants, and an upload token none', async () => {
    expect((await overview(engineer)).items.map((plant) => plant.name)).toEqual(['Backwards', 'Silent']);
    const token = await makeToken(api, here, 'ingest', ids.Silent);
    expect((await ask(readOverview, 'GET', { token })).status).toBe(403);
  });
  it('sums the seven local days that end with yesterday and no day before them', async () => {
    const plant = await plantNamed('Backwards');
    expect(plant).toMatchObject({ firstDay: addDays(YESTERDAY, -6), lastDay: YESTERDAY, currency: 'USD' });
    expect(plant.days.map((day) => day.day)).toEqual([addDays(YESTERDAY, -6), YESTERDAY]);
    expect(plant.yesterday).toMatchObject({ reverseMinutes: 200, largestReverseFlowGpm: 262 });
    expect(plant.week).toMatchObject({
      reverseMinutes: 220,
      reverseDays: 1,
      lowHours: 7,
      excessCost: 15,
      warmestSupplyF: 49,
      largestReverseFlowGpm: 262,
    });
    expect(plant.why).toBe('Reverse on 1 day of seven. Supply reached 49.0\u00a0°F.');
  });
  it('says what is not known as null', async () => {
    const plant = await plantNamed('New');
    expect(plant).toMatchObject({ yesterday: null, days: [], bars: [], dataThrough: null, lastUpload: null });
    expect(plant.week).toMatchObject({ excessCost: null, deltaTF: null, warmestSupplyF: null, cause: null });
  });
  it('goes page by page with ranks that go on', async () => {
    const first = await overview(consultant, '?limit=3');
    expect(first.items.map((plant) => plant.rank)).toEqual([1, 2, 3]);
    const second = await overview(consultant, `?limit=3&cursor=${first.nextCursor ?? ''}`);
    expect(second.items.map((plant) => [plant.rank, plant.name])).toEqual([[4, 'New']]);
    expect(second.nextCursor).toBeNull();
  });
  it('speaks SI when asked', async () => {
    const { items } = await overview(consultant, '?units=si&limit=1');
    expect(items[0]).toMatchObject({
      targetSupplyC: expect.closeTo(6.667, 3) as number,
      week: { warmestSupplyC: expect.closeTo(9.444, 3) as number },
    });
    expect(items[0]?.why).toContain('9.4\u00a0°C');
  });
});

describe('the hours of the overview', () => {
  const noon = () => localDayStart(YESTERDAY, ZONE) + 12 * HOUR_MS;
  beforeAll(async () => {
    await addHour('Calm', noon(), {
      low: true,
      cause: 'light-load',
      excess_flow_gpm: 5,
      delta_t_f: 6,
      secondary_flow_gpm: 1000,
      production_delta_t_f: 5,
      primary_flow_gpm: 1200,
      bypass_flow_gpm: 200,
    });
    // Half forward, half backward: -100 on the mean of the hour, 400 backward in its half, so 200 forward in the other.
    await addHour('Calm', noon() + HOUR_MS, {
      forward_minutes: 30,
      reverse_minutes: 30,
      delta_t_f: 12,
      secondary_flow_gpm: 3000,
      bypass_flow_gpm: -100,
      reverse_flow_gpm: 400,
      production_delta_t_f: 14,
      primary_flow_gpm: 2900,
    });
    const start = noon();
    const day = new Date(start).toISOString().slice(0, 10);
    const slot = (start - Date.parse(`${day}T00:00:00Z`)) / HOUR_MS;
    const channel = (value: (hour: number) => number) =>
      `{${Array.from({ length: 24 }, (_, hour) => value(hour)).join(',')}}`;
    const arrays = RESULT_CHANNELS.map((name) =>
      name === 'direction'
        ? channel((hour) => (hour === slot ? 1 : 0))
        : name === 'reverse_probability'
          ? channel(() => 0.1)
          : channel(() => 0),
    );
    await api.owner.query(
      `insert into result_block (organization_id, plant_id, day, step, settings_revision, kernel_version, input_hash, ${RESULT_CHANNELS.join(', ')})
       values ($1, $2, $3, 60, 1, '1', 'x', ${arrays.map((_, index) => `$${index + 4}`).join(', ')})`,
      [there, ids.Calm, day, ...arrays],
    );
  });
  it('are bars with the mean of each direction and the sureness of the one that held most', async () => {
    const { bars } = await plantNamed('Calm');
    expect(bars).toHaveLength(2);
    expect(bars[0]).toMatchObject({
      t: noon(),
      forwardMinutes: 60,
      bypassFlowGpm: 200,
      forwardFlowGpm: 200,
      reverseFlowGpm: null,
    });
    expect(bars[0]?.probability).toBeCloseTo(0.9, 6);
    expect(bars[1]).toMatchObject({ forwardFlowGpm: 200, reverseFlowGpm: -400, probability: null });
  });
  it('give the week’s delta-T weighted by flow, its leading cause, and the part of the day that ran backwards', async () => {
    const { week } = await plantNamed('Calm');
    expect(week.deltaTF).toBeCloseTo((6 * 1000 + 12 * 3000) / 4000, 9);
    expect(week.productionDeltaTF).toBeCloseTo((5 * 1200 + 14 * 2900) / 4100, 9);
    expect(week.cause).toBe('light-load');
    expect(week.reversePart).toBe('afternoon');
  });
});

describe('what waits for someone', () => {
  it('is counted: episodes of these days that nobody has acknowledged', async () => {
    const add = (cause: string, endedAt: string, acknowledged: boolean) =>
      api.owner.query(
        `insert into episode (organization_id, plant_id, cause, started_at, ended_at, hours, worst_hour, acknowledged_at)
         values ($1, $2, $3, $4::timestamptz - interval '1 hour', $4, 1, $4, case when $5 then now() end)`,
        [here, ids.Backwards, cause, endedAt, acknowledged],
      );
    const recent = new Date(localDayStart(YESTERDAY, ZONE)).toISOString();
    await add('reverse-flow', recent, false);
    await add('coil-shortfall', recent, false);
    await add('valve-leakage', recent, true);
    await add('warm-supply', '2020-01-01T00:00:00Z', false);
    expect((await plantNamed('Backwards')).openEpisodes).toBe(2);
  });
  it('is said: what became of the last upload', async () => {
    const problems = JSON.stringify([
      { code: 'w', severity: 'warning', message: 'Two rows repeat.', count: 2 },
      { code: 'e', severity: 'error', message: 'No time column was found.', count: 1 },
    ]);
    await api.owner.query(
      `insert into upload (organization_id, plant_id, filename, status, problems) values ($1, $2, 'week.csv', 'failed', $3)`,
      [here, ids.Silent, problems],
    );
    const plant = await plantNamed('Silent');
    expect(plant.lastUpload).toMatchObject({
      filename: 'week.csv',
      status: 'failed',
      problem: 'No time column was found.',
    });
    expect(plant.why).toContain('The last upload failed: No time column was found.');
  });
});
