import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { ProblemLog } from '@/lib/trends/problems';
import { numberOfText } from '@/lib/trends/cell-text';
import { BLANK, ValueReader } from '@/lib/trends/values';
import { unitOfHeading, unitOfText } from '@/lib/trends/unit-text';
import type { TrendUnitId } from '@/lib/units';

function read(cell: string, unit: TrendUnitId = 'degF', decimal: '.' | ',' = '.') {
  const log = new ProblemLog();
  const value = new ValueReader('col', unit, decimal, log).read(cell, 8);
  return { value, problems: log.list() };
}

describe('ValueReader', () => {
  test.each([
    ['44.2', 44.2],
    [' 44.2 ', 44.2],
    ['-5', -5],
    ['+7.5', 7.5],
    ['.5', 0.5],
    ['0', 0],
    ['0.000', 0],
    ['1e2', 100],
    ['1.2E+02', 120],
    ['44.2 °F', 44.2],
    ['44.2F', 44.2],
    ['44.2 °F {ok}', 44.2],
    ['44.2 {overridden}', 44.2],
  ])('reads %j as %d', (cell, value) => {
    expect(read(cell)).toEqual({ value, problems: [] });
  });

  test.each([
    ['1,234', '.', 1234],
    ['1,234.5', '.', 1234.5],
    ['-1,234.8', '.', -1234.8],
    ['412,345.8', '.', 412345.8],
    ['1 234.5', '.', 1234.5],
    ["1'234.5", '.', 1234.5],
    ['1\u202f234', '.', 1234],
    ['1.234,5', ',', 1234.5],
    ['1.234', ',', 1234],
    ['44,2', ',', 44.2],
    ['-88,8', ',', -88.8],
    ['20.5', ',', 20.5],
    ['1 234,5', ',', 1234.5],
  ] as const)('reads %j with decimal %j as %d', (cell, decimal, value) => {
    expect(numberOfText(cell, decimal)).toBe(value);
    expect(read(cell, 'gpm', decimal).value).toBe(value);
  });

  test('grouped and plain spellings of any number read the same, in both decimal signs', () => {
    fc.assert(
      fc.property(fc.integer({ min: -499_999_99, max: 499_999_99 }), (hundredths) => {
        const value = hundredths / 100;
        fc.pre(value > -900);
        const english = value.toLocaleString('en-US', { minimumFractionDigits: 2 });
        const german = value.toLocaleString('de-DE', { minimumFractionDigits: 2 });
        expect(read(english, 'gpm').value).toBe(value);
        expect(read(german, 'gpm', ',').value).toBe(value);
        expect(read(value.toFixed(2), 'gpm').value).toBe(value);
      }),
    );
  });

  test.each(['Bad', 'NaN', '---', '#N/A', 'null', 'No Data', 'n/a', 'Infinity'])('%j stands for no reading', (cell) => {
    const { value, problems } = read(cell);
    expect(value).toBeNaN();
    expect(problems).toMatchObject([{ code: 'missing-word', severity: 'warning', row: 8, column: 'col', count: 1 }]);
    expect(problems[0]!.message).toBe(`"${cell}" stands for no reading. Read as missing.`);
  });

  test.each(['', '   ', '\t'])('an empty cell %j is blank, not 0', (cell) => {
    const { value, problems } = read(cell);
    expect(value).toBe(BLANK);
    expect(problems[0]).toMatchObject({ code: 'empty-cell', message: 'The cell is empty. Read as missing.' });
  });

  test.each(['Bad Input', '0x1F', '44.2.1', '12abc', '44,20', '1,23,456'])('%j is not a number', (cell) => {
    const { value, problems } = read(cell);
    expect(value).toBeNaN();
    expect(problems[0]).toMatchObject({
      code: 'not-a-number',
      severity: 'error',
      message: `"${cell}" is not a number. Read as missing.`,
    });
  });

  test.each(['-9999', '-999.9', '-32768'])('%s is a placeholder in any unit', (cell) => {
    expect(read(cell, 'gpm').value).toBeNaN();
    expect(read(cell, 'gpm').problems[0]).toMatchObject({ code: 'placeholder' });
  });

  test('a number no sensor reads is missing, judged in the file’s unit', () => {
    expect(read('512.3', 'degC').problems[0]).toMatchObject({
      code: 'out-of-range',
      message: '512.3 °C is beyond what such a sensor can read. Read as missing; check the unit.',
    });
    expect(read('280', 'K').value).toBe(280);
    expect(read('280', 'degC').value).toBeNaN();
  });

  test('a point marked as not good is missing', () => {
    expect(read('44.2 °F {fault}').value).toBeNaN();
    expect(read('44.2 °F {fault}').problems[0]?.message).toBe('"44.2 °F {fault}" is marked "fault". Read as missing.');
  });

  test.each([
    ['On', 1],
    ['OFF', 0],
    ['true', 1],
    ['False', 0],
    ['Running', 1],
    ['stopped', 0],
    ['1', 1],
    ['0', 0],
    ['0.4', 0.4],
    ['On (1)', 1],
  ])('a status reads %j as %d', (cell, value) => {
    expect(read(cell, 'on/off')).toEqual({ value, problems: [] });
  });

  test('a status word in a temperature is not a number, and a word that is no status is said so', () => {
    expect(read('On').problems[0]?.message).toBe('"On" is not a number. Read as missing.');
    expect(read('Hand', 'on/off').problems[0]?.message).toBe('"Hand" is neither on nor off. Read as missing.');
    expect(read('3', 'on/off')).toMatchObject({ value: 1, problems: [{ code: 'status-number' }] });
  });
});

describe('ProblemLog', () => {
  test('counts a kind, keeps the sentence of its first row, and lists in row order', () => {
    const log = new ProblemLog();
    const add = (row: number, column: string) =>
      log.add({ code: 'x', severity: 'error', row, column, message: () => `row ${row}` });
    add(9, 'a');
    add(4, 'a');
    add(7, 'b');
    expect(log.list()).toEqual([
      { code: 'x', severity: 'error', message: 'row 4', row: 4, column: 'a', count: 2 },
      { code: 'x', severity: 'error', message: 'row 7', row: 7, column: 'b', count: 1 },
    ]);
  });

  test('stays within 200 kinds and loses no count, however various the trouble', () => {
    const log = new ProblemLog();
    for (let i = 0; i < 5000; i++)
      log.add({ code: 'w', severity: 'error', row: i, column: `c${i % 500}`, detail: `d${i}`, message: () => `m${i}` });
    expect(log.list().length).toBeLessThanOrEqual(200);
    expect(log.list().reduce((sum, { count }) => sum + count, 0)).toBe(5000);
  });

  test('after eight different words of one column the rest are counted together', () => {
    const log = new ProblemLog();
    for (let i = 0; i < 20; i++)
      log.add({ code: 'w', severity: 'error', row: i, column: 'c', detail: `d${i}`, message: () => `m${i}` });
    expect(log.list()).toHaveLength(9);
    expect(log.list().at(-1)).toMatchObject({
      message: 'Other words that are not readings. Read as missing.',
      count: 12,
    });
  });
});

describe('units in text', () => {
  test.each([
    ['°F', 'degF'],
    ['ºC', 'degC'],
    ['Deg. F', 'degF'],
    ['US GPM', 'gpm'],
    ['gal/min', 'gpm'],
    ['m³/hr', 'm3/h'],
    ['L/sec', 'L/s'],
    ['kW', 'kW'],
    ['Tons', 'tons'],
    ['ft. H2O', 'ftH2O'],
  ])('%s is %s', (text, unit) => {
    expect(unitOfText(text)).toBe(unit);
  });

  test.each([
    ['P Sup T (F)', 'degF', 'P Sup T'],
    ['EEC.S.FLOW, US GPM', 'gpm', 'EEC.S.FLOW'],
    ['P Flow gpm', 'gpm', 'P Flow'],
    ['CHWST [°C]', 'degC', 'CHWST'],
    ['chw_supply_temp_degF', 'degF', 'chw_supply_temp'],
    ['Plant kW', 'kW', 'Plant'],
    ['Pump speed %', '%', 'Pump speed'],
  ])('the heading %j names %s', (heading, unit, name) => {
    expect(unitOfHeading(heading)).toMatchObject({ unit, name });
  });

  test('a last letter is only a hint, and an unknown unit is kept as text', () => {
    expect(unitOfHeading('OAT F')).toMatchObject({ unit: null, letter: 'degF' });
    expect(unitOfHeading('Durchfluss [ l/h]')).toMatchObject({ unit: null, text: 'l/h' });
    expect(unitOfHeading('Chiller 1 HP')).toMatchObject({ unit: null, letter: null });
  });
});
