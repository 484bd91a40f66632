import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { ProblemLog } from '@/lib/trends/problems';
import { detectSentinels, looksLikePlaceholder } from '@/lib/trends/sentinels';
import { ValueReader } from '@/lib/trends/values';

const wave = (count: number, low: number, high: number): number[] =>
  Array.from({ length: count }, (_, i) => Math.round((low + ((high - low) * (1 + Math.sin(i / 9))) / 2) * 10) / 10);

describe('looksLikePlaceholder', () => {
  test.each([
    888.8, -88.8, 999.9, -999.9, 9999, -9999, 32_767, 65_535, 6553.5, 3276.7, 327.67, -32_768, 99_999, 3.4e38, 111.1,
  ])('%d is written like one', (value) => {
    expect(looksLikePlaceholder(value)).toBe(true);
  });

  test.each([0, 8, 44, 44.2, 99, 100, 998.7, 1234, 6553, 880, -40])('%d is not', (value) => {
    expect(looksLikePlaceholder(value)).toBe(false);
  });
});

describe('detectSentinels', () => {
  const spoilt = (bulk: number[], value: number, times = 5) => [...bulk, ...Array.from({ length: times }, () => value)];

  test.each([
    [888.8, 'degC', wave(300, 5, 30)],
    [-88.8, 'degC', wave(300, 5, 30)],
    [999.9, 'degF', wave(300, 40, 60)],
    [9999, 'gpm', wave(300, 0, 2400)],
    [-9999, 'gpm', wave(300, 0, 2400)],
    [6553.5, 'gpm', wave(300, 800, 1900)],
    [3276.7, 'kW', wave(300, 100, 400)],
    [65_535, 'gpm', wave(300, 0, 12_000)],
    [0, 'degF', wave(300, 42, 46)],
    [888, '%', wave(300, 0, 100)],
  ] as const)('%d is found in a column in %s', (value, unit, bulk) => {
    expect(detectSentinels(spoilt([...bulk], value), unit)).toEqual([value]);
  });

  test.each([
    ['a flow of 0 is a flow', spoilt(wave(300, 800, 1900), 0, 90), 'gpm'],
    ['0 degrees Celsius is near chilled water', spoilt(wave(300, 4, 9), 0), 'degC'],
    ['88.8 F is warm weather', spoilt(wave(300, 50, 95), 88.8), 'degF'],
    ['99.9 % is full load', spoilt(wave(300, 20, 100), 99.9, 60), '%'],
    ['999.9 gpm that the flow passes through', spoilt(wave(300, 0, 1400), 999.9), 'gpm'],
    ['888.8 gpm of a starting pump that neighbours lead to', [...spoilt(wave(300, 0, 9), 888.8), 700, 800], 'gpm'],
    ['once is chance', spoilt(wave(300, 800, 1900), 9999, 1), 'gpm'],
    ['a status has no placeholders', spoilt(wave(300, 0, 1), 255), 'on/off'],
    ['a constant set-point is a reading', spoilt([], 44.4, 300), 'degF'],
  ] as const)('%s', (_, values, unit) => {
    expect(detectSentinels(values, unit)).toEqual([]);
  });

  test('never names a number within the bulk, for any column', () => {
    const column = fc.array(
      fc.double({ min: -60, max: 110, noNaN: true }).map((value) => Math.round(value * 10) / 10),
      {
        minLength: 30,
        maxLength: 200,
      },
    );
    fc.assert(
      fc.property(column, (values) => {
        const sorted = [...values].sort((a, b) => a - b);
        const [low, high] = [sorted[Math.floor(values.length / 5)]!, sorted[Math.floor((values.length * 4) / 5)]!];
        for (const found of detectSentinels(values, 'degF')) expect(found < low || found > high).toBe(true);
      }),
    );
  });
});

describe('a column’s placeholders in the reader', () => {
  test('they are missing, counted and never averaged in; readings beside them are read', () => {
    const log = new ProblemLog();
    const reader = new ValueReader('Flow', 'gpm', '.', log, { sentinels: [-88.8, 6553.5] });
    const values = ['950', '6553.5', '6553.4', '-88.8', '0', '-88.7', '6553.5'].map((cell, i) =>
      reader.read(cell, i + 2),
    );
    expect(values).toEqual([950, NaN, 6553.4, NaN, 0, -88.7, NaN]);
    expect(log.list()[0]!.message).toMatch('6553.5');
    expect(log.list()).toMatchObject([
      { code: 'placeholder', count: 2, row: 3 },
      { code: 'placeholder', count: 1, row: 5 },
    ]);
  });

  test('without a look at the column, one that no sensor can read is still a placeholder, not a wrong unit', () => {
    const log = new ProblemLog();
    const reader = new ValueReader('Temp', 'degC', ',', log);
    expect(reader.read('888,8', 2)).toBeNaN();
    expect(reader.read('512,3', 3)).toBeNaN();
    expect(log.list().map(({ code }) => code)).toEqual(['placeholder', 'out-of-range']);
  });
});

// Open data beside the project; sources and licences are in shared/data/README.md.
const LOGGER = path.resolve(import.meta.dirname, '../../../shared/data/messy_csv/solar_logger/20180815.csv');

describe('a real logger whose unused inputs show 888.8, -88.8, -999.9 and -9999', () => {
  if (!existsSync(LOGGER)) {
    test('is not there (shared/data): nothing was read', () => expect(existsSync(LOGGER)).toBe(false));
    return;
  }
  const rows = readFileSync(LOGGER, 'latin1')
    .split('\r\n')
    .slice(1)
    .map((line) => line.split('\t'))
    .filter((cells) => cells.length === 29);

  test.each([
    [1, 'degC', 1, []],
    [5, 'degC', 0, ['placeholder']],
    [6, 'degC', 0, ['placeholder']],
    [7, 'bar', 0, ['placeholder']],
    [8, 'degC', 0, ['placeholder']],
    [9, 'L/min', 0, ['placeholder']],
  ] as const)('column %d in %s', (cell, unit, readable, codes) => {
    const sentinels = detectSentinels(
      rows.map((cells) => Number(cells[cell]!.replace(',', '.'))),
      unit,
    );
    const log = new ProblemLog();
    const reader = new ValueReader('col', unit, ',', log, { sentinels });
    const values = rows.map((cells, i) => reader.read(cells[cell]!, i + 2));
    expect(values.filter((value) => !Number.isNaN(value))).toHaveLength(readable * rows.length);
    expect(log.list().map(({ code }) => code)).toEqual(codes);
    if (codes.length > 0) expect(log.list()[0]!.count).toBe(rows.length);
  });
});
