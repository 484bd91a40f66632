import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as getHour } from '@/app/api/v1/plants/[plantId]/hours/[hourStart]/route';
import { HourDetail } from '@/lib/schemas/results';
import { ask } from '../support/api';
import { DAYS, insertHour, insertPoint, setScene, writeEstimates, writeSamples, type Scene } from './data-scene';

let scene: Scene;
const at = (hour: number) => `2026-10-31T${String(hour).padStart(2, '0')}:00:00Z`;
beforeAll(async () => {
  scene = await setScene();
  const sample = async (role: string, value: number) => {
    const pointId = await insertPoint(scene, role);
    return DAYS.map((day) => ({ pointId, day, value: () => value }));
  };
  await writeSamples(scene, [
    ...(await sample('primarySupplyTemp', 43.9)),
    ...(await sample('secondarySupplyTemp', 47.2)),
    ...(await sample('secondaryReturnTemp', 56.2)),
    ...(await sample('primaryReturnTemp', 56.1)),
    ...(await sample('primaryFlow', 880)),
    ...(await sample('secondaryFlow', 1210)),
    ...(await sample('bypassFlowUnsigned', 310)),
  ]);
  await writeEstimates(scene);
  const reverse = {
    load_tons: 450,
    delta_t_f: 8.96,
    production_delta_t_f: 11.97,
    expected_delta_t_f: 12,
    reverse_minutes: 60,
    cause: 'reverse-flow',
    cause_confidence: 0.8,
    avoidable_flow_gpm: 100,
    excess_energy_kwh: 20,
    excess_cost: 2.8,
    quality: 1,
    units_running: 1,
    stranded_tons: 0,
  };
  await insertHour(scene, {
    hour_start: at(10),
    low: false,
    delta_t_f: 12.4,
    production_delta_t_f: 10,
    forward_minutes: 60,
    load_tons: 416,
  });
  await insertHour(scene, { hour_start: at(13), ...reverse, excess_flow_gpm: 310 });
  await insertHour(scene, { hour_start: at(14), ...reverse, excess_flow_gpm: 500 });
  await insertHour(scene, { hour_start: at(15), ...reverse, excess_flow_gpm: 310 });
  await insertHour(scene, { hour_start: at(17), ...reverse, excess_flow_gpm: null });
  await insertHour(scene, { hour_start: '2026-10-25T13:00:00Z', ...reverse, excess_flow_gpm: 900 });
});
afterAll(() => scene.api.close());

const get = (hourStart: string, query = '') =>
  ask(getHour, 'GET', {
    path: `/x?${query}`,
    params: { plantId: scene.plantId, hourStart },
    cookie: scene.operator.cookie,
  });
const detail = async (hourStart: string, query = '') => HourDetail.parse(await (await get(hourStart, query)).json());

describe('an hour in full', () => {
  it('stands measured beside worked out at the five stations', async () => {
    const { stations, direction, intervals, steadyIntervals, reverseProbability, unitsRunning } = await detail(at(13));
    expect([direction, intervals, steadyIntervals, reverseProbability, unitsRunning]).toEqual([
      'reverse',
      12,
      12,
      0.99,
      1,
    ]);
    expect(stations.map(({ station }) => station)).toEqual([
      'production-supply',
      'supply-to-buildings',
      'return-from-buildings',
      'return-to-production',
      'common-pipe',
    ]);
    expect(stations[0]).toMatchObject({
      measuredTempF: 43.9,
      reconciledTempF: 44,
      measuredFlowGpm: 880,
      reconciledFlowGpm: 900,
    });
    expect(stations[1]).toMatchObject({
      measuredTempF: 47.2,
      reconciledTempF: 47,
      tempPlusMinusF: 0.5,
      measuredFlowGpm: 1210,
      reconciledFlowGpm: 1200,
    });
    expect(stations[2]).toMatchObject({ measuredTempF: 56.2, measuredFlowGpm: null, reconciledFlowGpm: 1200 });
    // Backward through the pipe comes return water; the meter in it knows no direction.
    expect(stations[4]).toMatchObject({
      measuredTempF: null,
      reconciledTempF: 56,
      measuredFlowGpm: 310,
      reconciledFlowGpm: -300,
      flowLoGpm: -400,
      flowHiGpm: -150,
    });
  });

  it('has a ledger that closes to the digit shown, with the hour table’s own load and production', async () => {
    const { ledger, hour } = await detail(at(13));
    expect(ledger).toEqual({ loadF: 9, blendF: 3, dilutionF: 0, productionF: 12 });
    expect([hour.deltaTF, hour.productionDeltaTF]).toEqual([8.96, 11.97]);
    const forward = await detail(at(10));
    expect(forward.ledger).toEqual({ loadF: 12.4, blendF: 0, dilutionF: 2.4, productionF: 10 });
  });

  it('gives the evidence in sentences with numbers', async () => {
    const { evidence } = await detail(at(13));
    const claims = evidence.map(({ claim }) => claim);
    expect(claims).toEqual([
      'The meters say reverse.',
      'The common pipe was read.',
      'The temperatures say reverse.',
      'Together they say reverse.',
      'The blend.',
      'The staging.',
      'The flow.',
      'The cause: reverse flow.',
    ]);
    expect(evidence[0]?.detail).toContain('880');
  });

  it('is ranked by excess flow among all low hours, ties by time, or among those of a period', async () => {
    const rank = async (hour: string, query?: string) => {
      const { rank: place, rankOf } = await detail(hour, query);
      return [place, rankOf];
    };
    expect(await rank('2026-10-25T13:00:00Z')).toEqual([1, 5]);
    expect(await rank(at(14))).toEqual([2, 5]);
    expect(await rank(at(13))).toEqual([3, 5]);
    expect(await rank(at(15))).toEqual([4, 5]);
    expect(await rank(at(17))).toEqual([5, 5]);
    expect(await rank(at(14), 'from=2026-10-31&to=2026-11-01')).toEqual([1, 4]);
    expect(await rank(at(10))).toEqual([null, 5]);
  });

  it('knows its neighbours, across hours that are not there', async () => {
    expect(await detail(at(15))).toMatchObject({ before: at(14), after: at(17) });
    expect(await detail('2026-10-25T13:00:00Z')).toMatchObject({ before: null, after: at(10) });
  });

  it('names the settings and the kernel it was worked out with', async () => {
    expect(await detail(at(13))).toMatchObject({ settingsRevision: 1, kernelVersion: 'test' });
  });

  it('is found by any spelling of its instant, and is a 404 where there is none', async () => {
    expect((await get('2026-10-31T07:00:00-06:00')).status).toBe(200);
    expect((await get(encodeURIComponent('2026-10-31T07:00:00-06:00'))).status).toBe(200);
    expect((await get(at(16))).status).toBe(404);
    expect((await get('yesterday')).status).toBe(404);
  });

  it('without estimates or samples tells what is left, and invents nothing', async () => {
    const { stations, direction, intervals, evidence } = await detail('2026-10-25T13:00:00Z');
    expect([direction, intervals]).toEqual(['unknown', 0]);
    expect(stations.every((station) => station.reconciledTempF === null && station.measuredFlowGpm === null)).toBe(
      true,
    );
    expect(evidence.map(({ claim }) => claim)).toContain('Nothing was worked out.');
  });

  it('in SI carries SI names, sentences and a ledger that closes', async () => {
    const answer = (await (await get(at(13), 'units=si')).json()) as {
      ledger: Record<string, number>;
      stations: Record<string, number>[];
      evidence: { detail: string }[];
    };
    expect(answer.ledger).toEqual({ loadC: 5, blendC: 1.7, dilutionC: 0, productionC: 6.7 });
    expect(answer.stations[1]?.reconciledTempC).toBeCloseTo(8.333, 3);
    expect(answer.stations[1]?.tempPlusMinusC).toBeCloseTo(0.5 / 1.8, 3);
    expect(answer.evidence.map((each) => each.detail).join(' ')).not.toMatch(/gpm|°F/);
  });
});
