import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as getCoverage } from '@/app/api/v1/plants/[plantId]/coverage/route';
import { GET as getSeries } from '@/app/api/v1/plants/[plantId]/series/route';
import { GET as getTide } from '@/app/api/v1/plants/[plantId]/tide/route';
import { Coverage } from '@/lib/schemas/data-requests';
import { Series, Tide } from '@/lib/schemas/results';
import { ask } from '../support/api';
import { DAYS, insertPoint, problemOf, setScene, writeEstimates, writeSamples, type Scene } from './data-scene';

let scene: Scene;
beforeAll(async () => {
  scene = await setScene();
  const supply = await insertPoint(scene, 'primarySupplyTemp');
  const flow1 = await insertPoint(scene, 'primaryFlow', 0, 0);
  const flow2 = await insertPoint(scene, 'primaryFlow', 0, 1);
  // A meter that was replaced before this record began: a point without a value.
  await insertPoint(scene, 'primaryFlow', 0, 2);
  const warm1 = await insertPoint(scene, 'secondaryReturnTemp', 0, 0);
  const warm2 = await insertPoint(scene, 'secondaryReturnTemp', 0, 1);
  const unit = await insertPoint(scene, 'unitFlow', 2);
  await writeSamples(
    scene,
    DAYS.flatMap((day) => [
      { pointId: supply, day, value: (slot: number) => 40 + (slot % 12) },
      { pointId: flow1, day, value: () => 600 },
      // Missing in the second hour of each day.
      { pointId: flow2, day, value: (slot: number) => (slot >= 12 && slot < 24 ? NaN : 300) },
      { pointId: warm1, day, value: () => 54 },
      { pointId: warm2, day, value: (slot: number) => (slot < 12 ? NaN : 58) },
      { pointId: unit, day, value: () => 500 },
    ]),
  );
  await writeEstimates(scene);
});
afterAll(() => scene.api.close());

const params = () => ({ plantId: scene.plantId });
type Handler = Parameters<typeof ask>[0];
const get = (handler: Handler, query: string, headers: Record<string, string> = {}) =>
  ask(handler, 'GET', { path: `/x?${query}`, params: params(), cookie: scene.operator.cookie, headers });
const tide = async (query: string) => Tide.parse(await (await get(getTide, query)).json());
const series = async (query: string) => Series.parse(await (await get(getSeries, query)).json());

describe('the tide strip', () => {
  it('gives means, the minutes of each direction and the widest interval around the mean', async () => {
    const { bars, barMinutes } = await tide('from=2026-10-31T00:00:00Z&to=2026-11-01T00:00:00Z&barMinutes=1440');
    expect(barMinutes).toBe(1440);
    // Midnight in Denver is 06:00Z: the first bar has the six hours before it, the second the other eighteen.
    expect(bars.map(({ forwardMinutes, reverseMinutes }) => [forwardMinutes, reverseMinutes])).toEqual([
      [360, 0],
      [360, 720],
    ]);
    const [, second] = bars;
    expect(second).toMatchObject({
      stillMinutes: 0,
      unknownMinutes: 0,
      probability: 0.99,
      forwardFlowGpm: 200,
      reverseFlowGpm: 300,
      blendedSupplyF: 46,
      blendedSupplyMaxF: 47,
      primarySupplyF: 44,
      primaryFlowGpm: 933.3333,
    });
    // Mean (200 * 6 - 300 * 12) / 18; the widest interval reaches 100 below its own estimate and 150 above it.
    expect(second?.bypassFlowGpm).toBeCloseTo(-133.3333, 4);
    expect(second?.bypassFlowLoGpm).toBeCloseTo(-233.3333, 4);
    expect(second?.bypassFlowHiGpm).toBeCloseTo(16.6667, 4);
  });

  it('has one bar an interval at a day, each with its own interval', async () => {
    const { bars, barMinutes, stepMinutes } = await tide('from=2026-10-31&to=2026-11-01');
    expect([barMinutes, stepMinutes, bars.length]).toEqual([5, 5, 288]);
    expect(bars[0]).toMatchObject({
      t: Date.parse('2026-10-31T06:00:00Z'),
      bypassFlowGpm: 200,
      bypassFlowLoGpm: 150,
      bypassFlowHiGpm: 250,
      probability: 0.98,
    });
  });

  it('follows the plant’s clock over a day of 25 hours', async () => {
    const { bars } = await tide('from=2026-11-01&to=2026-11-02&barMinutes=180');
    expect(bars.map(({ t }) => new Date(t).toISOString().slice(11, 16))).toEqual([
      '06:00',
      '10:00',
      '13:00',
      '16:00',
      '19:00',
      '22:00',
      '01:00',
      '04:00',
    ]);
    expect(bars[0]).toMatchObject({ forwardMinutes: 240 });
    const hours = await tide('from=2026-11-01&to=2026-11-02&barMinutes=60');
    expect(hours.bars).toHaveLength(25);
  });

  it('counts intervals without data for nothing, and leaves bars without any empty', async () => {
    const { bars } = await tide('from=2026-11-02T19:00:00Z&to=2026-11-02T22:00:00Z&barMinutes=60');
    expect(bars.map((bar) => bar.reverseMinutes)).toEqual([60, 0, 0]);
    expect(bars[1]).toMatchObject({
      unknownMinutes: 0,
      bypassFlowGpm: null,
      bypassFlowLoGpm: null,
      primarySupplyF: null,
    });
  });

  it('lengthens bars that would not hold whole intervals, and refuses too many of them', async () => {
    expect((await tide('from=2026-10-31&to=2026-11-01&barMinutes=3')).barMinutes).toBe(5);
    const refused = await problemOf(await get(getTide, 'from=2026-01-01&to=2026-11-01&barMinutes=5'));
    expect(refused).toMatchObject({ status: 400, paths: ['barMinutes'] });
  });

  it('by default shows the last fourteen local days of data, and says which', async () => {
    const { from, to } = await tide('');
    expect([from, to]).toEqual(['2026-10-20T06:00:00Z', '2026-11-03T07:00:00Z']);
  });

  it('in SI changes names with units', async () => {
    const answer = (await (await get(getTide, 'from=2026-10-31&to=2026-11-01&units=si')).json()) as {
      bars: Record<string, number>[];
    };
    expect(answer.bars[0]?.bypassFlowLs).toBeCloseTo(12.618, 3);
    expect(answer.bars[0]?.primarySupplyC).toBeCloseTo(6.667, 3);
    expect(answer.bars[0]).not.toHaveProperty('bypassFlowGpm');
  });

  it('is a 304 for who has it, until results change', async () => {
    const first = await get(getTide, 'from=2026-10-31&to=2026-11-01');
    const tag = { 'if-none-match': first.headers.get('etag') ?? '' };
    expect((await get(getTide, 'from=2026-10-31&to=2026-11-01', tag)).status).toBe(304);
    expect((await get(getTide, 'from=2026-10-31&to=2026-11-02', tag)).status).toBe(200);
    await scene.api.owner.query(`update plant set results_revision = results_revision + 1`);
    expect((await get(getTide, 'from=2026-10-31&to=2026-11-01', tag)).status).toBe(200);
  });
});

describe('chart series', () => {
  it('give the least, mean and greatest of each bar', async () => {
    const {
      times,
      stepMinutes,
      series: list,
    } = await series('from=2026-10-31&to=2026-11-01&points=primarySupplyTemp&width=24');
    expect([stepMinutes, times.length]).toEqual([60, 24]);
    expect(list[0]).toMatchObject({ point: 'primarySupplyTemp', label: 'primary supply temperature', unit: '°F' });
    expect([list[0]?.lo[3], list[0]?.mean[3], list[0]?.hi[3]]).toEqual([40, 45.5, 51]);
  });

  it('say the same from hourly bands and from values', async () => {
    // Bars of half an hour come from values; two of them make the hour that comes from bands.
    const fine = await series('from=2026-10-31&to=2026-11-01&points=primarySupplyTemp&width=48');
    const coarse = await series('from=2026-10-31&to=2026-11-01&points=primarySupplyTemp&width=24');
    expect(fine.stepMinutes).toBe(30);
    const halves = fine.series[0]?.mean ?? [];
    expect(coarse.series[0]?.mean[5]).toBeCloseTo(((halves[10] ?? 0) + (halves[11] ?? 0)) / 2, 4);
  });

  it('add up the feeders of a flow, one missing making the sum missing, and leave out a feeder without a value', async () => {
    const { series: list, times } = await series(
      'from=2026-10-31T00:00:00Z&to=2026-10-31T03:00:00Z&points=primaryFlow&width=36',
    );
    expect(times).toHaveLength(36);
    expect([list[0]?.mean[0], list[0]?.mean[12], list[0]?.mean[24]]).toEqual([900, null, 900]);
  });

  it('average the feeders of a temperature over those that are there', async () => {
    const { series: list } = await series(
      'from=2026-10-31T00:00:00Z&to=2026-10-31T03:00:00Z&points=secondaryReturnTemp&width=36',
    );
    expect([list[0]?.mean[0], list[0]?.mean[12]]).toEqual([54, 56]);
  });

  it('name units by number, give results beside points, and null where nothing is trended', async () => {
    const { series: list } = await series(
      'from=2026-10-31&to=2026-11-01&width=24&points=unitFlow,unitFlow:7,bypassFlowGpm,loadDeltaTF,bypassTemp',
    );
    expect(list.map(({ point, unit }) => [point, unit])).toEqual([
      ['unitFlow:2', 'gpm'],
      ['unitFlow:7', 'gpm'],
      ['bypassFlowGpm', 'gpm'],
      ['loadDeltaTF', '°F'],
      ['bypassTemp', '°F'],
    ]);
    expect(list[0]?.mean[0]).toBe(500);
    expect(list[1]?.mean.every((value) => value === null)).toBe(true);
    expect([list[2]?.mean[0], list[2]?.mean[23]]).toEqual([200, 200]);
    expect(list[3]?.mean[10]).toBe(9);
  });

  it('in SI convert a temperature and a difference each in its own way', async () => {
    const { series: list } = await series(
      'from=2026-10-31&to=2026-11-01&width=24&points=secondaryReturnTemp,loadDeltaTF,primaryFlow&units=si',
    );
    expect(list.map(({ unit }) => unit)).toEqual(['°C', 'K', 'L/s']);
    expect(list[1]?.mean[0]).toBeCloseTo(12.5 / 1.8, 4);
    expect(list[0]?.mean[5]).toBeCloseTo((56 - 32) / 1.8, 4);
  });

  it('with a word nobody knows are a 400 that names it', async () => {
    const refused = await problemOf(
      await get(getSeries, 'from=2026-10-31&to=2026-11-01&points=primaryFlow,tide,direction'),
    );
    expect(refused).toMatchObject({
      status: 400,
      paths: ['points', 'points'],
      detail: expect.stringMatching(/"tide"/) as string,
    });
  });
});

describe('coverage', () => {
  it('is the share of each local day that arrived, point by point', async () => {
    const coverage = Coverage.parse(await (await get(getCoverage, 'from=2026-10-31&to=2026-11-02')).json());
    expect(coverage.days).toEqual(['2026-10-31', '2026-11-01']);
    const shares = (role: string, ordinal: number) =>
      coverage.points.find((point) => point.role === role && point.ordinal === ordinal)?.shares;
    expect(shares('primarySupplyTemp', 0)).toEqual([1, 1]);
    // An hour of UTC is missing each day: one of 24 hours, one of 25.
    expect(shares('primaryFlow', 1)).toEqual([0.9583, 0.96]);
    expect(shares('primaryFlow', 2)).toEqual([0, 0]);
    expect(coverage.points.find((point) => point.role === 'unitFlow')?.label).toBe('unit flow 2');
  });

  it('of a day that is only half there is less', async () => {
    const coverage = Coverage.parse(await (await get(getCoverage, 'from=2026-11-02&to=2026-11-03')).json());
    // The record ends with UTC day 2 November: 17 of the local day's 24 hours.
    expect(coverage.points[0]?.shares).toEqual([Math.round((17 / 24) * 1e4) / 1e4]);
  });
});
