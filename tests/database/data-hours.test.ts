import ExcelJS from 'exceljs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as getHours } from '@/app/api/v1/plants/[plantId]/hours/route';
import { HourRow } from '@/lib/schemas/results';
import { ask } from '../support/api';
import { insertHour, problemOf, setScene, type Scene } from './data-scene';

let scene: Scene;
const hourAt = (index: number) =>
  new Date(Date.parse('2026-07-01T06:00:00Z') + index * 3_600_000).toISOString().replace('.000Z', 'Z');
const LOW = 60;
const GOOD = 12;
beforeAll(async () => {
  scene = await setScene();
  for (let index = 0; index < LOW; index++) {
    await insertHour(scene, {
      hour_start: hourAt(index),
      // Many ties, and some hours in which the figure is not known.
      excess_flow_gpm: index % 10 === 7 ? null : 100 * (index % 4) + 1 / 3,
      excess_cost: index % 10 === 3 ? null : (index * 7) % 13,
      delta_t_f: index % 10 === 5 ? null : 6 + (index % 5) * 0.1,
      reverse_minutes: (index % 3) * 12.3,
      cause: index % 2 === 0 ? 'reverse-flow' : 'coil-shortfall',
      load_tons: 500,
      quality: 1,
    });
  }
  for (let index = LOW; index < LOW + GOOD; index++)
    await insertHour(scene, { hour_start: hourAt(index), low: false, excess_flow_gpm: 9999 });
});
afterAll(() => scene.api.close());

const PERIOD = 'from=2026-07-01&to=2026-07-05';
const get = (query: string) =>
  ask(getHours, 'GET', { path: `/x?${query}`, params: { plantId: scene.plantId }, cookie: scene.operator.cookie });
const page = async (query: string) =>
  (await (await get(query)).json()) as { items: HourRow[]; nextCursor: string | null };
async function allPages(query: string, limit: number): Promise<HourRow[]> {
  const seen: HourRow[] = [];
  let cursor: string | null = null;
  do {
    const got: { items: HourRow[]; nextCursor: string | null } = await page(
      `${query}&limit=${limit}${cursor === null ? '' : `&cursor=${cursor}`}`,
    );
    seen.push(...got.items);
    cursor = got.nextCursor;
  } while (cursor !== null);
  return seen;
}

/** The contract's columns, in its order. */
const HEADER =
  'hour_start,low,load_tons,delta_t_f,expected_delta_t_f,production_delta_t_f,reverse_minutes,reverse_flow_gpm,blended_supply_f,blended_supply_max_f,excess_flow_gpm,avoidable_flow_gpm,cause,cause_confidence,excess_energy_kwh,excess_cost,stranded_tons,unknown_minutes,quality';

type Figure = 'excessFlowGpm' | 'excessCost' | 'deltaTF' | 'reverseMinutes';
const RANKINGS: readonly (readonly [string, Figure, 'falling' | 'rising'])[] = [
  ['excess', 'excessFlowGpm', 'falling'],
  ['cost', 'excessCost', 'falling'],
  ['deltaT', 'deltaTF', 'rising'],
  ['reverse', 'reverseMinutes', 'falling'],
];

describe('the ranked hours', () => {
  it.each(RANKINGS)('by %s stand in order, what is not known last and ties by time', async (rank, figure, way) => {
    const hours = await allPages(`${PERIOD}&rank=${rank}`, 500);
    expect(hours).toHaveLength(LOW);
    expect(hours.map((hour) => HourRow.parse(hour))).toEqual(hours);
    const key = (hour: HourRow) => (hour[figure] === null ? Infinity : (way === 'falling' ? -1 : 1) * hour[figure]);
    const wanted = hours.toSorted((a, b) =>
      key(a) === key(b) ? a.hourStart.localeCompare(b.hourStart) : key(a) - key(b),
    );
    expect(hours.map((hour) => hour.hourStart)).toEqual(wanted.map((hour) => hour.hourStart));
  });

  it.each(RANKINGS)('by %s come in pages of seven without a gap or a repeat', async (rank) => {
    const whole = await allPages(`${PERIOD}&rank=${rank}`, 500);
    const paged = await allPages(`${PERIOD}&rank=${rank}`, 7);
    expect(paged.map((hour) => hour.hourStart)).toEqual(whole.map((hour) => hour.hourStart));
  });

  it('use the partial index of their ranking', async () => {
    await scene.api.owner.query('analyze hour');
    const { rows } = await scene.api.owner.query<{ 'QUERY PLAN': string }>(
      `explain select * from hour where plant_id = '${scene.plantId}' and low order by excess_flow_gpm desc nulls last, hour_start limit 5`,
    );
    expect(rows.map((row) => row['QUERY PLAN']).join('\n')).toContain('hour_rank_excess');
  });

  it('are the low ones of the period and the cause asked for', async () => {
    const caused = await allPages(`${PERIOD}&cause=coil-shortfall`, 500);
    expect(caused).toHaveLength(LOW / 2);
    expect(new Set(caused.map((hour) => hour.cause))).toEqual(new Set(['coil-shortfall']));
    const day = await allPages('from=2026-07-02&to=2026-07-03', 500);
    expect(day.map((hour) => hour.hourStart).sort()[0]).toBe('2026-07-02T06:00:00Z');
    expect(day).toHaveLength(24);
  });

  it('with all=true are every hour by time, also the good ones', async () => {
    const hours = await allPages(`${PERIOD}&all=true`, 11);
    expect(hours.map((hour) => hour.hourStart)).toEqual(
      Array.from({ length: LOW + GOOD }, (_, index) => hourAt(index)),
    );
    expect(hours.at(-1)).toMatchObject({ low: 0, cause: 'none' });
  });

  it('refuse a cursor that is not theirs and a ranking that does not exist', async () => {
    expect(await problemOf(await get(`${PERIOD}&cursor=WzFd`))).toMatchObject({ status: 400, paths: ['cursor'] });
    expect(await problemOf(await get(`${PERIOD}&rank=fame`))).toMatchObject({ status: 400, paths: ['rank'] });
  });
});

describe('the hours as a file', () => {
  it('of CSV have exactly the columns of the contract, in the order of the ranking', async () => {
    const response = await get(`${PERIOD}&rank=cost&format=csv`);
    expect(response.headers.get('content-disposition')).toContain('low hours 2026-07-01 to 2026-07-04.csv');
    const lines = (await response.text()).trimEnd().split('\r\n');
    expect(lines[0]).toBe(HEADER);
    const whole = await allPages(`${PERIOD}&rank=cost`, 500);
    expect(lines.slice(1).map((line) => line.split(',')[0])).toEqual(whole.map((hour) => hour.hourStart));
    expect(lines[1]?.split(',').slice(0, 4)).toEqual([whole[0]?.hourStart, '1', '500', String(whole[0]?.deltaTF)]);
  });

  it('of CSV in SI carry SI names and numbers', async () => {
    const [header, row] = (await (await get(`${PERIOD}&rank=excess&format=csv&units=si`)).text()).split('\r\n');
    expect(header?.split(',').slice(2, 6)).toEqual([
      'load_kw',
      'delta_t_c',
      'expected_delta_t_c',
      'production_delta_t_c',
    ]);
    expect(row?.split(',')[2]).toBe('1758.4264');
  });

  it('of XLSX open as a table with the same columns and numbers as numbers', async () => {
    const response = await get(`${PERIOD}&rank=excess&format=xlsx`);
    expect(response.headers.get('content-type')).toContain('spreadsheetml');
    const book = new ExcelJS.Workbook();
    await book.xlsx.load(await response.arrayBuffer());
    const sheet = book.getWorksheet('Hours');
    expect((sheet?.getRow(1).values as string[]).slice(1)).toEqual(HEADER.split(','));
    expect(sheet?.rowCount).toBe(LOW + 1);
    expect(sheet?.getRow(2).getCell(11).value).toBeCloseTo(300.3333, 4);
    expect(book.getWorksheet('Notes')?.getCell('A1').value).toMatch(/licensed engineer/);
  });
});
