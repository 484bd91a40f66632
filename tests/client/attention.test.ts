import { describe, expect, it } from 'vitest';
import { compareAttention, groundOf, whyItStandsHere, type PlantFacts } from '@/lib/client/attention';
import type { OverviewWeek } from '@/lib/schemas/overview';

const QUIET: OverviewWeek = {
  reverseMinutes: 0,
  unknownMinutes: 0,
  stillMinutes: 0,
  runningMinutes: 10_080,
  reverseDays: 0,
  reversePart: null,
  largestReverseFlowGpm: null,
  warmestSupplyF: 44,
  lowHours: 0,
  deltaTF: 11,
  productionDeltaTF: 10,
  excessCost: 0,
  excessEnergyKwh: 0,
  cause: null,
};
const plant = (week: Partial<OverviewWeek> = {}, facts: Partial<PlantFacts> = {}): PlantFacts => ({
  name: 'North loop',
  timeZone: 'America/Denver',
  arrangement: 'primary-secondary',
  criticalLoads: [],
  targetSupplyF: 44,
  lastDay: '2026-07-26',
  days: [],
  dataThrough: '2026-07-27T05:55:00.000Z',
  lastUpload: null,
  ...facts,
  week: { ...QUIET, ...week },
});
const REVERSE = plant({ reverseMinutes: 900, reverseDays: 4, reversePart: 'afternoon', warmestSupplyF: 49.6 });
const COST = plant({ excessCost: 388, lowHours: 168, cause: 'surplus-production' });
const DOUBT = plant({ unknownMinutes: 2220, excessCost: 61, lowHours: 96, cause: 'light-load' });
const CALM = plant({ excessCost: 34, lowHours: 153, cause: 'light-load' });
// Thursday 13:55 in Denver
const SILENT = plant({}, { dataThrough: '2026-07-23T19:55:00.000Z' });
const EMPTY = plant({ runningMinutes: 0 }, { dataThrough: null });

describe('the order "look at first"', () => {
  it('is reverse, cost, doubt, calm, silence, no data', () => {
    const order = [EMPTY, SILENT, CALM, DOUBT, COST, REVERSE].sort(compareAttention);
    expect(order.map(groundOf)).toEqual(['reverse', 'cost', 'doubt', 'calm', 'silence', 'no-data']);
  });
  it('puts a plant with critical loads before one with more reverse hours', () => {
    const hospital = plant({ reverseMinutes: 100 }, { criticalLoads: ['wards'] });
    expect([REVERSE, hospital].sort(compareAttention)[0]).toBe(hospital);
  });
  it('goes by reverse hours, by cost, and by name where nothing else tells', () => {
    expect(compareAttention(plant({ reverseMinutes: 100 }), REVERSE)).toBeGreaterThan(0);
    expect(compareAttention(plant({ excessCost: 400, lowHours: 1, cause: 'coil-shortfall' }), COST)).toBeLessThan(0);
    expect(compareAttention(plant({}, { name: 'A' }), plant({}, { name: 'B' }))).toBeLessThan(0);
  });
  it('does not count reverse flow against a building bridge that holds its blend', () => {
    const bridge = { arrangement: 'building-bridge', targetSupplyF: 48 } as const;
    expect(groundOf(plant({ reverseMinutes: 9000, warmestSupplyF: 48.5 }, bridge))).toBe('calm');
    expect(groundOf(plant({ reverseMinutes: 9000, warmestSupplyF: 51 }, bridge))).toBe('reverse');
  });
  it('counts warm supply without reverse flow', () => {
    expect(groundOf(plant({ warmestSupplyF: 46.5 }))).toBe('reverse');
  });
  it('calls a plant silent only when nothing of yesterday has come in', () => {
    // Sunday 00:05 in Denver, the first minutes of yesterday
    expect(groundOf(plant({}, { dataThrough: '2026-07-26T06:05:00.000Z' }))).toBe('calm');
    expect(groundOf(plant({}, { dataThrough: '2026-07-26T06:00:00.000Z' }))).toBe('silence');
  });
});

describe('why it stands here', () => {
  it('says on how many days, when in the day, and how warm', () => {
    expect(whyItStandsHere(REVERSE)).toBe(
      'Reverse on 4 days of seven, mostly in the afternoon. Supply reached 49.6\u00a0°F.',
    );
  });
  it('names the critical loads and speaks the units of the reader', () => {
    const hospital = plant(
      { reverseMinutes: 900, reverseDays: 7, warmestSupplyF: 50 },
      { criticalLoads: ['theatres', 'wards'] },
    );
    expect(whyItStandsHere(hospital, 'si')).toBe(
      'Reverse every day. Supply to theatres and wards reached 10.0\u00a0°C.',
    );
  });
  it('says what costs and for how long', () => {
    expect(whyItStandsHere(COST)).toBe(
      'More water is produced than the buildings take; the surplus crosses over, 168 hours of the week.',
    );
  });
  it('says for how much of the running time the direction is unknown', () => {
    expect(whyItStandsHere(DOUBT)).toBe('Direction unknown in 37 of 168 running hours.');
  });
  it('says since when nothing has come, and what became of the last upload', () => {
    expect(whyItStandsHere(SILENT)).toBe('Nothing received since Thu 13:55.');
    const failed = {
      ...SILENT,
      lastUpload: {
        id: 'x',
        filename: 'week.csv',
        status: 'failed',
        createdAt: '',
        problem: 'No time column was found.',
      },
    } as const;
    expect(whyItStandsHere(failed)).toBe(
      'Nothing received since Thu 13:55. The last upload failed: No time column was found.',
    );
  });
  it('says so when there is nothing to do', () => {
    expect(whyItStandsHere(CALM)).toBe('Light load; nothing to do first.');
    expect(whyItStandsHere(plant({ stillMinutes: 9000 }))).toBe('At slack: in balance most of the week.');
    expect(whyItStandsHere(plant({ runningMinutes: 0 }))).toBe('Not running this week.');
    expect(whyItStandsHere(EMPTY)).toBe('No data yet.');
  });
});
