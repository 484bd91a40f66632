import fc from 'fast-check';
import Papa from 'papaparse';
import { describe, expect, test } from 'vitest';
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
