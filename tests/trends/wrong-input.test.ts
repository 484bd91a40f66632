import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { createTrendReader, TrendError } from '@/lib/trends';
import { previewOf } from './preview-support';
import { bytesOf } from './support';

/** The error a preview throws, or a failure. */
function refused(text: string | Uint8Array): TrendError {
  try {
    previewOf(text);
  } catch (error) {
    if (error instanceof TrendError) return error;
    throw error;
  }
  throw new Error('the file was read');
}

describe('a file that cannot be read gets a sentence that says what, where and what to do', () => {
  test.each<[string, string | Uint8Array, TrendError['code'], string]>([
    ['no bytes', '', 'empty', 'The file is empty. Export the trend again and drop that file.'],
    ['only blanks', ' \n\t\n ', 'empty', 'The file holds nothing but blanks. Export the trend again.'],
    ['only delimiters', ',,,\n,,,\n', 'empty', 'The file holds nothing but blank lines. Export the trend again.'],
    [
      'a workbook',
      Uint8Array.of(0x50, 0x4b, 3, 4, 20, 0, 6, 0),
      'not-text',
      'This is a spreadsheet workbook or a zip archive, not text. Export the trend as CSV text and drop that file.',
    ],
    [
      'a PDF',
      '%PDF-1.7\n%âãÏÓ\n',
      'not-text',
      'This is a PDF document, not text. Export the trend as CSV text and drop that file.',
    ],
    [
      'a web page',
      '<!DOCTYPE html><html><body>Sign in</body></html>',
      'unsupported',
      'This is a web page, not a table. Export the trend as CSV text and drop that file.',
    ],
    [
      'JSON',
      '[{"time": "2026-07-20", "a": 1}]',
      'unsupported',
      'This is JSON, not a table. Export the trend as CSV text and drop that file.',
    ],
    [
      'prose',
      'Dear colleague\nplease find the trend attached\n',
      'no-header',
      'No row of column names was found: no row holds more than one cell. Export the trend as a table with a heading, one column a point.',
    ],
    [
      'a heading alone',
      '"Trend report"\nTimestamp,CHWS T,CHWR T\n',
      'no-rows',
      'Row 2 holds words but no row of readings follows it. Export a period that holds data.',
    ],
    [
      'no time column',
      'CHWS T,CHWR T\n44.1,55.2\n44.2,55.3\n',
      'no-time-column',
      'No time column was found: none of "CHWS T", "CHWR T" holds dates and times. Export the trend with a time in every row.',
    ],
    [
      'times of day without dates',
      'Clock,CHWS T\n00:00,44.1\n00:05,44.2\n',
      'no-time-column',
      'Column "Clock" holds times of day but no column holds dates. Export the trend with its dates.',
    ],
    [
      'dates without a year',
      'date_time,a\n08/28  00:01:00,1\n08/28  24:00:00,2\n',
      'unsupported',
      'The times in column "date_time" have no year ("08/28 00:01:00"). Export them with the year, for example 2026-08-28 00:05, and drop the file again.',
    ],
  ])('%s', (_, text, code, message) => {
    expect(refused(text)).toMatchObject({ name: 'TrendError', code, message });
  });

  test('with many columns the sentence names six of them', () => {
    const names = Array.from({ length: 19 }, (_, i) => `P${i}`);
    const text = `${names.join(',')}\n${names.map(() => '1.5').join(',')}\n`;
    expect(refused(text).message).toContain(
      'none of "P0", "P1", "P2", "P3", "P4", "P5" and 13 more holds dates and times',
    );
  });

  test('the row is there for the page to show', () => {
    expect(refused('Timestamp,a\n')).toMatchObject({ code: 'no-rows', row: 1 });
  });
});

describe('whatever bytes are dropped', () => {
  /** Previews and, when that works, reads the file as suggested. */
  function tryAll(bytes: Uint8Array): void {
    try {
      const preview = previewOf(bytes);
      const reader = createTrendReader({ ...preview, stepMinutes: 5 });
      reader.push(bytes);
      reader.finish();
      expect(reader.report().rowsRead).toBeGreaterThan(0);
    } catch (error) {
      if (!(error instanceof TrendError)) throw error;
      expect(error.message).toMatch(/^[A-Z"].*[.]$/s);
    }
  }

  test('the answer is a preview that can be confirmed as it is, or a TrendError in a sentence', () => {
    fc.assert(fc.property(fc.uint8Array({ maxLength: 300 }), tryAll), { numRuns: 300 });
  });

  test('so it is for tables of every kind of cell', () => {
    const cell = fc.constantFrom(
      ...[
        '44.1',
        '1,044',
        '44,2',
        '',
        'Bad',
        'On',
        '07/20/2026 00:05',
        '20.07.2026',
        '00:05',
        '2026-07-20T00:05Z',
        '46223.5',
      ],
      ...[
        '1784505900',
        'CHWS T',
        'Time',
        '"',
        '"x',
        'a "b" c',
        '°F',
        'gpm',
        '-9999',
        '99/99/2026',
        '\0',
        '{ok}',
        'Pri Flow (gpm)',
      ],
    );
    const table = fc.array(fc.array(cell, { minLength: 1, maxLength: 5 }), { minLength: 1, maxLength: 12 });
    const delimiter = fc.constantFrom(',', ';', '\t', '|');
    const end = fc.constantFrom('\n', '\r\n', '\r');
    fc.assert(
      fc.property(table, delimiter, end, fc.boolean(), (rows, sign, newline, timed) => {
        // Half of the tables have a heading and a time in every row, so that their cells are read.
        const dated = rows.map((cells, i) => [`2026-07-20 00:${10 + i}`, ...cells]);
        const lines = timed ? [['Time', 'Pri CHWS T', 'CH-1 Status', 'Pri Flow (gpm)'], ...dated] : rows;
        tryAll(bytesOf(lines.map((cells) => cells.join(sign)).join(newline)));
      }),
      { numRuns: 1500 },
    );
  }, 60_000);
});
