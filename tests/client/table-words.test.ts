import { expect, test } from 'vitest';
import { curlLine } from '@/lib/client/ingest-tokens';
import { dialectWords, filesWords, shapeWords } from '@/lib/client/table-words';
import { previewTable } from '../support/preview';

test('how a table is written stands in one line', () => {
  const { dialect } = previewTable();
  expect(dialectWords({ dialect })).toBe('comma, UTF-8, decimal point');
  expect(
    dialectWords({
      dialect: {
        ...dialect,
        encoding: 'windows-1252',
        delimiter: ';',
        decimal: ',',
        upperHeaderRow: 4,
        headerRow: 5,
        unitRow: 6,
        firstDataRow: 7,
      },
    }),
  ).toBe('semicolon, Windows-1252, decimal comma, a heading of two rows, units in row 6, 3 lines before the heading');
  expect(dialectWords({ dialect: { ...dialect, headerRow: 0, firstDataRow: 1 } })).toBe(
    'comma, UTF-8, decimal point, no heading',
  );
});

test('a row a reading says which column holds what', () => {
  const shape = { kind: 'long' as const, point: 'Name', value: 'Value', status: 'Status', unit: null };
  expect(shapeWords({ shape })).toBe('a row a reading: point in “Name”, value in “Value”, status in “Status”');
  expect(shapeWords(previewTable())).toBe('a column a point');
});

test('the first few of many files are named', () => {
  expect(filesWords(['a', 'b', 'c', 'd'])).toBe('a, b, c, d');
  expect(filesWords(['a', 'b', 'c', 'd', 'e'])).toBe('a, b, c and 2 more');
});

test('the line of a feed goes to its plant with its token, in quotes that every shell takes', () => {
  const line = curlLine('https://slackwater.example', 'p1', 'slw_abc');
  expect(line).toContain('-H "Authorization: Bearer slw_abc"');
  expect(line).toMatch(/ https:\/\/slackwater\.example\/api\/v1\/plants\/p1\/uploads$/);
  expect(line).not.toContain("'");
  expect(line).not.toContain('\n');
  expect(curlLine('https://slackwater.example', 'p1', null)).toContain('Bearer TOKEN"');
});
