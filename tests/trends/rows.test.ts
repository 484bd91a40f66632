import fc from 'fast-check';
import Papa from 'papaparse';
import { describe, expect, test } from 'vitest';
import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { ProblemLog } from '@/lib/trends/problems';
import { RowShape, splitSplicedRow } from '@/lib/trends/row-shape';
import { lastRowEnd, linesOfRow, newlineOf, parseRows, RowCutter, wholeRows } from '@/lib/trends/rows';

/** Rows and stray quotation marks of a text given in pieces, with blocks of a few characters. */
function cutUp(text: string, lengths: readonly number[], blockCharacters: number) {
  const rows: string[][] = [];
  const strays: number[] = [];
  const cutter = new RowCutter(
    ',',
    (block, newline) => {
      const parsed = parseRows(block, ',', newline);
      if (block.endsWith(newline)) parsed.pop();
      rows.push(...parsed);
    },
    (before) => strays.push(rows.length + before),
    blockCharacters,
  );
  let at = 0;
  for (const length of lengths) {
    cutter.push(text.slice(at, at + length));
    at += length;
  }
  cutter.push(text.slice(at));
  cutter.end();
  return { rows, strays };
}

describe('RowCutter', () => {
  test('gives the parser’s rows for any pieces and any block size, quoted line breaks and escaped quotes included', () => {
    const cell = fc.string({ unit: fc.constantFrom('a', '1', ',', '"', '\n', '\r\n', ' ', 'é'), maxLength: 6 });
    const table = fc.array(fc.array(cell, { minLength: 2, maxLength: 3 }), { minLength: 1, maxLength: 8 });
    const newline = fc.constantFrom('\n', '\r\n');
    fc.assert(
      fc.property(
        table,
        newline,
        fc.array(fc.integer({ min: 1, max: 9 })),
        fc.integer({ min: 1, max: 40 }),
        (rows, end, cuts, size) => {
          const text = `h,i${end}${Papa.unparse(rows, { newline: end, quotes: true })}`;
          const expected = [['h', 'i'], ...rows.map((cells) => cells.map((each) => each.replaceAll('\r\n', '\n')))];
          expect(cutUp(text, cuts, size)).toEqual({ rows: expected, strays: [] });
        },
      ),
      { numRuns: 300 },
    );
  });

  test('reads on behind a quotation mark that is never closed, and says in which row it stands', () => {
    const text = `a,b\n1,2\n"3,4\n${'5,6\n'.repeat(4000)}`;
    const { rows, strays } = cutUp(text, [], 64);
    expect(rows).toHaveLength(4003);
    expect(rows[2]).toEqual(['3', '4']);
    expect(strays).toEqual([2]);
  });

  test('takes a mark inside an unquoted cell for an inch mark', () => {
    expect(cutUp('a,8" pipe\n1,2\n', [3], 1).rows).toEqual([
      ['a', '8" pipe'],
      ['1', '2'],
    ]);
  });

  test('refuses a row without an end before it fills the memory', () => {
    const cutter = new RowCutter(
      ',',
      () => undefined,
      () => undefined,
    );
    expect(() => cutter.push('x'.repeat(5_000_000))).toThrow(/no line ends/);
  });

  test('drops zero bytes', () => {
    expect(cutUp('a,b\n1\0,2\n', [], 4).rows[1]).toEqual(['1', '2']);
  });
});

describe('line ends', () => {
  test.each([
    ['a,b\n1,2', '\n'],
    ['a,b\r\n1,2', '\n'],
    ['a,b\r1,2\r', '\r'],
    ['a,b', '\n'],
  ])('%j ends its lines with %j', (text, newline) => {
    expect(newlineOf(text)).toBe(newline);
  });

  test('a line break inside quotes is no row end', () => {
    expect(lastRowEnd('a,b\n"x\ny', ',', '\n', false)).toEqual({ end: 4, strayQuote: -1 });
  });

  test('rows count as many lines as an editor shows', () => {
    expect(linesOfRow(['a', 'b\nc\nd'])).toBe(3);
  });

  test('the last row of a head that is not the whole file is left aside', () => {
    expect(wholeRows('a,b\n1,2\n3,', ',', false)).toEqual([
      ['a', 'b'],
      ['1', '2'],
    ]);
    expect(wholeRows('a,b\n1,2\n3,', ',', true)).toHaveLength(3);
  });
});

describe('two records on one line', () => {
  const isTime = (cell: string) =>
    /^\d{4}-\d\d-\d\d \d\d:\d\d$/.test(cell) || /^\d\d\.\d\d\.\d{4} \d\d:\d\d$/.test(cell);
  const one = ['2026-07-20 00:05', '44.1', '950'];
  const two = ['2026-07-20 00:06', '44.2', '960'];

  test.each<[string, string[], string[][] | null]>([
    ['two whole ones are both read', [...one, ...two], [one, two]],
    ['three are all read', [...one, ...two, ...one], [one, two, one]],
    ['a torn one before a whole one is left out', [...one.slice(0, 2), ...two], [two]],
    ['a whole one before a torn one is read', [...one, ...two.slice(0, 2)], [one]],
    ['of two torn ones nothing is read', [...one.slice(0, 2), ...two.slice(0, 1)], []],
    [
      'a time behind what is left of a torn cell begins a record',
      ['2026-07-20 00:05', `4#x${two[0]!}`, ...two.slice(1)],
      [two],
    ],
    [
      'digits before the time leave open where it begins',
      ['2026-07-20 00:05', `44.1${two[0]!}`, ...two.slice(1)],
      null,
    ],
    ['a row that is merely long is not spliced', [...one, '7', '8', '9'], null],
    ['another form of time is a value', [...one, '20.07.2026 00:06', '1', '2'], null],
    ['a row without a time is not spliced', ['x', ...two, '1', '2'], null],
  ])('%s', (_, cells, records) => {
    expect(splitSplicedRow(cells, 3, isTime)).toEqual(records);
  });

  test('rows that end with a delimiter keep their empty last cell', () => {
    expect(splitSplicedRow([...one, ...two, ''], 4, isTime)).toEqual([
      [...one, ''],
      [...two, ''],
    ]);
  });

  test('where the time is not the first cell, only exactly two records are told apart', () => {
    const named = (record: string[]) => ['P1', ...record];
    expect(splitSplicedRow([...named(one), ...named(two)], 4, isTime, 1)).toEqual([named(one), named(two)]);
    expect(splitSplicedRow([...named(one).slice(0, 3), ...named(two)], 4, isTime, 1)).toBeNull();
  });

  test('records of any numbers, whole or torn at a cell, are told apart without a wrong one', () => {
    const cell = fc.double({ min: -99, max: 999, noNaN: true }).map((value) => value.toFixed(1));
    const record = fc
      .tuple(fc.integer({ min: 10, max: 59 }), fc.array(cell, { minLength: 4, maxLength: 4 }))
      .map(([minute, cells]) => [`2026-07-20 00:${minute}`, ...cells]);
    fc.assert(
      fc.property(
        fc.array(fc.tuple(record, fc.integer({ min: 1, max: 5 })), { minLength: 2, maxLength: 4 }),
        (records) => {
          const line = records.flatMap(([cells, kept]) => cells.slice(0, kept));
          const whole = records.flatMap(([cells, kept]) => (kept === 5 ? [cells] : []));
          expect(splitSplicedRow(line, 5, isTime)).toEqual(whole);
        },
      ),
    );
  });

  test('they are counted by what became of them, with the first row, and what was done', () => {
    const problems = new ProblemLog();
    const shape = new RowShape([one, two], 3, problems);
    shape.unsplice([...one, ...two], 5, isTime);
    shape.unsplice([...one.slice(0, 2), ...two], 7, isTime);
    shape.unsplice([...one.slice(0, 2), ...two], 8, isTime);
    expect(shape.unsplice(one, 9, isTime)).toBeNull();
    expect(problems.list()).toMatchObject([
      {
        code: 'spliced-row',
        row: 5,
        count: 1,
        message: 'Two records stand on one line: the end of the line between them was lost. Both were read.',
      },
      {
        row: 7,
        count: 2,
        message:
          'Two records stand on one line: the end of the line between them was lost. The whole one was read; what is left of the other was left out.',
      },
    ]);
  });

  test('rows with a second time of their own are never taken apart', () => {
    const withEnd = ['2026-07-20 00:05', '2026-07-20 00:06', '44.1'];
    const shape = new RowShape([withEnd, withEnd], 3, new ProblemLog());
    expect(shape.unsplice([...withEnd, '7'], 5, isTime)).toBeNull();
  });

  // Open data beside the project; sources and licences are in shared/data/README.md.
  const data = path.resolve(import.meta.dirname, '../../../shared/data/messy_csv/solar_logger');
  test.each([
    ['20170622.csv', 221, '22.06.2017 03:42'],
    ['20180815.csv', 1194, '15.08.2018 19:54'],
  ])('in a real logger’s %s, row %d still holds the whole record of %s', (name, row, time) => {
    if (!existsSync(data)) return expect(existsSync(data)).toBe(false);
    const lines = readFileSync(path.join(data, name), 'latin1').replaceAll('\0', '').split('\r\n');
    const records = splitSplicedRow(lines[row - 1]!.split('\t'), 29, isTime);
    expect(records).toHaveLength(1);
    expect(records![0]).toHaveLength(29);
    expect(records![0]!.slice(0, 1)).toEqual([time]);
    expect(records![0]![26]).toBe(time.slice(11).replace(/^0/, ''));
  });
});
