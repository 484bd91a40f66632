import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as getIntervals } from '@/app/api/v1/plants/[plantId]/intervals/route';
import { IntervalRow } from '@/lib/schemas/results';
import { ask } from '../support/api';
import { LAST_SLOT, problemOf, setScene, SLOTS, STEP, writeEstimates, type Scene } from './data-scene';

let scene: Scene;
beforeAll(async () => {
  scene = await setScene();
  await writeEstimates(scene);
});
afterAll(() => scene.api.close());

const get = (query: string) =>
  ask(getIntervals, 'GET', { path: `/x?${query}`, params: { plantId: scene.plantId }, cookie: scene.operator.cookie });
const page = async (query: string) =>
  (await (await get(query)).json()) as { items: IntervalRow[]; nextCursor: string | null };
const ALL = 'from=2026-10-31T00:00:00Z&to=2026-11-03T00:00:00Z';

/** The contract's columns, in its order. */
const HEADER =
  'timestamp,direction,reverse_probability,bypass_flow_gpm,bypass_flow_lo_gpm,bypass_flow_hi_gpm,blended_supply_f,blended_supply_lo_f,blended_supply_hi_f,primary_flow_gpm,secondary_flow_gpm,primary_supply_f,primary_return_f,secondary_return_f,load_tons,load_delta_t_f,production_delta_t_f,steady,quality,state,reason';

describe('intervals as JSON', () => {
  it('are one row an interval in the words of the contract', async () => {
    const { items } = await page('from=2026-10-31T11:55:00Z&to=2026-10-31T12:05:00Z');
    expect(items).toHaveLength(2);
    expect(items.map((item) => IntervalRow.parse(item))).toEqual(items);
    expect(items[0]).toMatchObject({
      timestamp: '2026-10-31T11:55:00Z',
      direction: 'forward',
      bypassFlowGpm: 200,
      steady: true,
      state: 'running',
      reason: '',
    });
    expect(items[1]).toMatchObject({
      timestamp: '2026-10-31T12:00:00Z',
      direction: 'reverse',
      bypassFlowGpm: -300,
      bypassFlowLoGpm: -400,
    });
  });

  it('say null where nothing is known, and why', async () => {
    const { items } = await page('from=2026-11-02T20:00:00Z&to=2026-11-02T20:05:00Z');
    expect(items[0]).toMatchObject({
      direction: 'unknown',
      reverseProbability: null,
      loadTons: null,
      steady: false,
      quality: 0,
      state: 'unknown',
      reason: 'no data',
    });
  });

  it('come in pages without a gap or a repeat, across the ends of days', async () => {
    const seen: string[] = [];
    let cursor: string | null = null;
    let pages = 0;
    do {
      const got: { items: IntervalRow[]; nextCursor: string | null } = await page(
        `${ALL}&limit=100${cursor === null ? '' : `&cursor=${cursor}`}`,
      );
      seen.push(...got.items.map((item) => item.timestamp));
      cursor = got.nextCursor;
      pages++;
    } while (cursor !== null);
    const wanted = Array.from({ length: 3 * SLOTS }, (_, slot) =>
      new Date(Date.parse('2026-10-31T00:00:00Z') + slot * STEP * 60_000).toISOString().replace('.000Z', 'Z'),
    );
    expect(seen).toEqual(wanted);
    expect(pages).toBe(Math.ceil((3 * SLOTS) / 100));
  });

  it('of a local day of 25 hours are 300', async () => {
    expect((await page('from=2026-11-01&to=2026-11-02')).items).toHaveLength(300);
  });

  it('in SI change names with units', async () => {
    const { items } = await page('from=2026-10-31T12:00:00Z&to=2026-10-31T12:05:00Z&units=si');
    expect(items[0]).toMatchObject({ loadDeltaTC: 5 });
    expect(items[0]).toHaveProperty('bypassFlowLoLs');
    expect(items[0]).not.toHaveProperty('loadTons');
  });

  it('refuse a cursor that is not theirs and a limit that is too large', async () => {
    expect(await problemOf(await get(`${ALL}&cursor=nonsense`))).toMatchObject({ status: 400, paths: ['cursor'] });
    expect(await problemOf(await get(`${ALL}&limit=10001`))).toMatchObject({ status: 400, paths: ['limit'] });
  });
});

describe('intervals as CSV', () => {
  it('have exactly the columns of the contract and every interval of the period', async () => {
    const response = await get(`${ALL}&format=csv`);
    expect(response.headers.get('content-type')).toMatch(/^text\/csv/);
    expect(response.headers.get('content-disposition')).toContain('intervals 2026-10-30 to 2026-11-02.csv');
    const lines = (await response.text()).trimEnd().split('\r\n');
    expect(lines[0]).toBe(HEADER);
    expect(lines).toHaveLength(1 + 3 * SLOTS);
    expect(lines[1]).toBe(
      '2026-10-31T00:00:00Z,forward,0.02,200,150,250,44,43.75,44.25,1000,800,44,54,56.5,416.5,12.5,10,1,1,running,',
    );
    expect(lines[1 + 2 * SLOTS + LAST_SLOT]).toBe('2026-11-02T20:00:00Z,unknown,,,,,,,,,,,,,,,,0,0,unknown,no data');
    expect(new Set(lines).size).toBe(lines.length);
  });

  it('carry SI names and numbers when asked for', async () => {
    const text = await (await get('from=2026-10-31T12:00:00Z&to=2026-10-31T12:05:00Z&format=csv&units=si')).text();
    const [header = '', row = ''] = text.split('\r\n');
    expect(header.split(',').slice(3, 9)).toEqual([
      'bypass_flow_ls',
      'bypass_flow_lo_ls',
      'bypass_flow_hi_ls',
      'blended_supply_c',
      'blended_supply_lo_c',
      'blended_supply_hi_c',
    ]);
    expect(header).toContain('load_kw,load_delta_t_c,production_delta_t_c');
    expect(row.split(',')[3]).toBe('-18.9271');
  });

  it('of a period without data are a header alone', async () => {
    expect(await (await get('from=2020-01-01&to=2020-03-01&format=csv')).text()).toBe(`${HEADER}\r\n`);
  });

  it('hold no transaction while the reader waits', async () => {
    const reader = (await get(`${ALL}&format=csv`)).body?.getReader();
    await reader?.read();
    const { rows } = await scene.api.owner.query<{ open: number }>(
      `select count(*)::int as open from pg_stat_activity where usename = 'slackwater_app' and datname = current_database() and state like 'idle in transaction%'`,
    );
    expect(rows[0]?.open).toBe(0);
    await reader?.cancel();
  });
});
