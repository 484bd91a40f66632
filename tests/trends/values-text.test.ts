import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { cellKind, decimalOf } from '@/lib/trends/cells';
import { convertedBetween, measureOfText, numberOfText } from '@/lib/trends/cell-text';
import { ProblemLog } from '@/lib/trends/problems';
import { statusMeaning } from '@/lib/trends/status-words';
import { unitOfText } from '@/lib/trends/unit-text';
import { BLANK, ValueReader, type ValueReaderOptions } from '@/lib/trends/values';
import { TREND_UNIT_IDS, TREND_UNITS, type TrendUnitId } from '@/lib/units';

function read(cell: string, unit: TrendUnitId = 'degF', decimal: '.' | ',' = '.', options: ValueReaderOptions = {}) {
  const log = new ProblemLog();
  const value = new ValueReader('col', unit, decimal, log, options).read(cell, 8);
  return { value, problems: log.list() };
}

describe('numbers as people write them', () => {
  test.each([
    ['(3.2)', '.', -3.2],
    ['(1,234.5)', '.', -1234.5],
    ['3.2-', '.', -3.2],
    ['−3.2', '.', -3.2],
    ['–3,2', ',', -3.2],
    ['"44.2"', '.', 44.2],
    ['" 44.2 "', '.', 44.2],
    ["'44.2", '.', 44.2],
    ['="44.2"', '.', 44.2],
    ['1.234,5', '.', 1234.5],
    ['1,234.5', ',', 1234.5],
    ['0,234,567', ',', 234_567],
    ['1’234.5', '.', 1234.5],
    ['1\u2009234', '.', 1234],
    ['1,2E+02', ',', 120],
    ['4.42e1', '.', 44.2],
  ] as const)('%j with decimal %j is %d', (cell, decimal, value) => {
    expect(read(cell, 'gpm', decimal)).toEqual({ value, problems: [] });
  });

  test.each([
    ['44.2°F', 'degF', '.', 44.2],
    ['1 234,5 m3/h', 'm3/h', ',', 1234.5],
    ['1 234,5 m³/h', 'm3/h', '.', 1234.5],
    ['950gpm', 'gpm', '.', 950],
    ['1,250 US gpm', 'gpm', '.', 1250],
    ['12 %', '%', '.', 12],
    ['3.5 ft H2O', 'ftH2O', '.', 3.5],
    ['(2.5 psi)', 'psi', '.', -2.5],
    ['44.2 {ok}', 'degF', '.', 44.2],
  ] as const)('the unit glued to %j is its column’s own', (cell, unit, decimal, value) => {
    expect(read(cell, unit, decimal)).toEqual({ value, problems: [] });
  });

  test('a value in another unit of the same quantity is converted and said so; one of another quantity is missing', () => {
    const celsius = read('6.7 °C');
    expect(celsius.value).toBeCloseTo(44.06, 9);
    expect(celsius.problems).toMatchObject([
      { code: 'unit-converted', severity: 'warning', message: '"6.7 °C" stands in a column in °F. Converted.' },
    ]);
    expect(read('10 L/s', 'gpm').value).toBeCloseTo(158.503, 3);
    const gpm = read('950 gpm');
    expect(gpm.value).toBeNaN();
    expect(gpm.problems).toMatchObject([{ code: 'other-quantity', severity: 'error' }]);
  });

  test('any value converted to another unit of its quantity and back is itself', () => {
    const unit = fc.constantFrom(...TREND_UNIT_IDS);
    fc.assert(
      fc.property(unit, unit, fc.double({ min: -500, max: 500, noNaN: true }), (from, to, value) => {
        const there = convertedBetween(value, from, to);
        const same = TREND_UNITS[from].quantity === TREND_UNITS[to].quantity;
        expect(Number.isNaN(there)).toBe(!same);
        if (same) expect(convertedBetween(there, to, from)).toBeCloseTo(value, 6);
      }),
    );
  });

  const styles = fc.record({
    decimal: fc.constantFrom<'.' | ','>('.', ','),
    group: fc.constantFrom('', ',', '.', ' ', "'", '’', '\u00a0', '\u202f', '\u2009'),
    places: fc.integer({ min: 1, max: 4 }),
    minus: fc.constantFrom('-', '−', '()', 'behind'),
    plus: fc.boolean(),
    pad: fc.constantFrom('', ' ', '\t', '\u00a0'),
    unit: fc.constantFrom('', ' gpm', 'gpm', ' US gpm'),
  });

  test('a number written in any decimal and thousands style, sign and unit reads back', () => {
    fc.assert(
      fc.property(styles, fc.integer({ min: -4_000_000_000, max: 4_000_000_000 }), (style, whole) => {
        const { decimal, group, places, minus, plus, pad, unit } = style;
        fc.pre(group !== decimal);
        const value = whole / 10_000;
        const [integer, fraction] = Math.abs(value).toFixed(places).split('.') as [string, string];
        const rounded = Number(`${integer}.${fraction}`) * (value < 0 ? -1 : 1) || 0;
        const grouped = integer.replace(/\B(?=(\d{3})+$)/g, group);
        // A minus in brackets or behind the number is tried without a unit.
        const digits = `${grouped}${decimal}${fraction}`;
        const isPlain = minus === '-' || minus === '−';
        const sign = rounded < 0 ? (isPlain ? minus : '') : plus ? '+' : '';
        const signed =
          rounded < 0 && minus === '()'
            ? `(${digits})`
            : rounded < 0 && minus === 'behind' && group === ''
              ? `${digits}-`
              : '';
        fc.pre(rounded >= 0 || isPlain || signed !== '');
        const text = signed || `${sign}${digits}${unit}`;
        expect(measureOfText(text.trim(), decimal)?.value).toBe(rounded);
        expect(read(`${pad}${text}${pad}`, 'gpm', decimal).value).toBe(
          [-999, -999.9, -9999, -9999.9, -99_999, -32_768, -3276.8].includes(rounded) ? Number.NaN : rounded,
        );
      }),
      { numRuns: 3000 },
    );
  });

  test('no text makes the reader throw, and what it answers is a number, NaN or blank', () => {
    const mark = fc.constantFrom(...Array.from('0123456789.,-+()eE"\' {}[]°%FCgpm/:\u00a0−'));
    const text = fc.oneof(fc.string({ unit: 'binary', maxLength: 80 }), fc.string({ unit: mark, maxLength: 30 }));
    const unit = fc.constantFrom(...TREND_UNIT_IDS);
    fc.assert(
      fc.property(text, unit, fc.constantFrom<'.' | ','>('.', ','), (cell, each, decimal) => {
        const { value } = read(cell, each, decimal, { sentinels: [888.8, 0] });
        expect(value === BLANK || Number.isNaN(value) || Number.isFinite(value)).toBe(true);
        expect(['good', 'bad', 'ends', 'unknown']).toContain(statusMeaning(cell));
        expect(() => cellKind(cell)).not.toThrow();
      }),
      { numRuns: 5000 },
    );
  });

  test('a very long cell is read in no time', () => {
    const startedMs = performance.now();
    for (const piece of ['1', '1,', '(', 'a ', "1'", '. ', '{', 'log ']) read(piece.repeat(200_000));
    expect(performance.now() - startedMs).toBeLessThan(2000);
  });

  test('cells with a unit or brackets are numbers to the finder of the table, and show its decimal sign', () => {
    expect(['1 234,5 m3/h', '(3.2)', '950gpm', '44,2 °C'].map(cellKind)).toEqual([
      'number',
      'number',
      'number',
      'number',
    ]);
    expect(decimalOf(['1 234,5 m3/h', '987,25 m3/h'])).toBe(',');
    expect(decimalOf(['1,234.5 gpm'])).toBe('.');
  });
});

describe('words', () => {
  test.each([
    ...['on', 'TRUE', 'Running', 'Running (1)', '1 - On', 'active', 'Ein', 'läuft', 'In Betrieb', 'wahr', 'marche'],
    ...['En marche', 'vrai', 'activé', 'Encendido', 'verdadero', 'Sí', 'en marcha'],
  ])('%j is on', (cell) => {
    expect(read(cell, 'on/off')).toEqual({ value: 1, problems: [] });
  });

  test.each([
    ...['off', 'FALSE', 'Stopped (0)', 'inactive', 'Not running', 'de-energized', 'Standby', 'Aus', 'Außer Betrieb'],
    ...['falsch', 'nein', 'Arrêt', 'à l’arrêt', 'faux', 'éteint', 'Apagado', 'falso', 'parado', 'detenido'],
  ])('%j is off', (cell) => {
    expect(read(cell, 'on/off')).toEqual({ value: 0, problems: [] });
  });

  test.each([
    '#N/A',
    'Out of service',
    'Störung',
    'keine Daten',
    'Hors service',
    'sin datos',
    '####',
    '<null>',
    'défaut',
  ])('%j stands for no reading', (cell) => {
    expect(read(cell).problems).toMatchObject([{ code: 'missing-word' }]);
  });

  test.each([
    ...[
      'Log Disabled',
      'log-disabled',
      'LOG_INTERRUPTED',
      'LogDisabled',
      'Buffer Purged',
      '{log-disabled}',
      'Trend disabled',
    ],
    ...['Log Enabled', 'time-change', 'Time Change: 3600', 'Aufzeichnung unterbrochen', 'Enregistrement arrêté'],
  ])('%j is a record about the log: it ends what was held', (cell) => {
    const { value, problems } = read(cell);
    expect(value).toBeNaN();
    expect(problems).toMatchObject([{ code: 'log-ended', severity: 'warning' }]);
    expect(statusMeaning(cell)).toBe('ends');
  });

  test('a date in a value’s place is said and told to the caller, each time', () => {
    const rows: number[] = [];
    const log = new ProblemLog();
    const reader = new ValueReader('col', 'on/off', '.', log, { onTime: (row) => rows.push(row) });
    for (const row of [4, 5]) expect(reader.read('2026-07-20 00:05', row)).toBeNaN();
    expect(reader.read('20.07.2026', 6)).toBeNaN();
    expect(rows).toEqual([4, 5, 6]);
    expect(log.list()).toMatchObject([{ code: 'time-in-value', row: 4, count: 3 }]);
  });

  test('problems met again are counted, not forgotten', () => {
    const log = new ProblemLog();
    const reader = new ValueReader('col', 'degF', '.', log);
    for (let row = 2; row < 1002; row++) reader.read(row % 2 === 0 ? 'Log disabled' : '888.8', row);
    expect(log.list().map(({ code, count }) => [code, count])).toEqual([
      ['log-ended', 500],
      ['placeholder', 500],
    ]);
  });
});

describe('statusMeaning', () => {
  test.each([
    ...['', 'ok', '{ok}', 'GOOD', '0', '192', 'Normal', 'valid', 'Good; overridden', 'unackedAlarm', 'gut', 'bon'],
    ...['{false,false,false,false}', 'F,F,T,F', 'true,false,false,false'],
  ])('%j is good', (text) => {
    expect(statusMeaning(text)).toBe('good');
  });

  test.each([
    ...['Bad', 'fault', '{down}', 'Good, stale', 'Uncertain', 'not good', 'Comm fail', 'out of service', 'ungültig'],
    ...['défaut', 'inválido', '{false,true,false,false}', 'F,F,F,T', 'Offline - no response', '64'],
  ])('%j is bad', (text) => {
    expect(statusMeaning(text)).toBe('bad');
  });

  test.each(['Hand', 'interpolated', '17', 'Chiller 1'])('%j says nothing that is known', (text) => {
    expect(statusMeaning(text)).toBe('unknown');
  });
});

describe('units', () => {
  test.each([
    ['MBH', 'MBH'],
    ['kBtu/h', 'MBH'],
    ['Btu/hr', 'Btu/h'],
    ['bar', 'bar'],
    ['litres/min', 'L/min'],
    ['Kelvin', 'K'],
    ['feet of water', 'ftH2O'],
    ['Prozent', '%'],
  ] as const)('%s is %s', (text, unit) => {
    expect(unitOfText(text)).toBe(unit);
  });

  test('12 MBH and 12,000 Btu/h are one ton, 3.5169 kW; one bar is 14.504 psi', () => {
    expect(convertedBetween(12, 'MBH', 'tons')).toBeCloseTo(1, 12);
    expect(TREND_UNITS['Btu/h'].toStored(12_000)).toBeCloseTo(3.516853, 6);
    expect(TREND_UNITS.bar.toStored(1)).toBeCloseTo(14.503774, 6);
  });
});

test('numberOfText keeps a number in the unit it is written in', () => {
  expect(numberOfText('6.7 °C', '.')).toBe(6.7);
});
