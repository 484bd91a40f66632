import { describe, expect, test } from 'vitest';
import { recogniseTable } from '@/lib/trends/dialect';
import { headingFingerprint } from '@/lib/trends/headings';
import { monthFirst, previewOf, tableOf } from './preview-support';
import { utf16Of } from './support';

const two = (value: number) => String(value).padStart(2, '0');
/** A two-column table whose time cells are given. */
const withTimes = (times: readonly (string | number)[], heading = 'Time'): string =>
  [`${heading},CHWS T`, ...times.map((time, i) => `${time},${44 + (i % 3) / 10}`), ''].join('\n');
const days = (count: number, text: (day: number, clock: string) => string): string[] =>
  Array.from({ length: count * 4 }, (_, i) => text(1 + Math.floor(i / 4), `${two((i % 4) * 6)}:00`));

describe('how a file is written', () => {
  test('three lines before the heading, quotes, and the first rows as read', () => {
    const text = `"Trend report"\n"Site: East"\n"Printed 07/27/2026"\n"Timestamp","CHWS T"\n"${monthFirst(0)}","44.2"\n"${monthFirst(1)}","44.1"\n`;
    const preview = previewOf(text);
    expect(preview.dialect).toEqual({
      encoding: 'utf-8',
      delimiter: ',',
      decimal: '.',
      headerRow: 4,
      upperHeaderRow: null,
      unitRow: null,
      firstDataRow: 5,
    });
    expect(preview).toMatchObject({
      timestamp: { columns: ['Timestamp'], form: 'month/day/year' },
      timeZone: 'America/New_York',
      stepMinutes: 1,
      firstRows: 2,
      rows: [
        ['07/20/2026 00:00', '44.2'],
        ['07/20/2026 00:01', '44.1'],
      ],
    });
  });

  test.each([
    ['semicolons with decimal commas', '20.07.2026 00:00;44,2;55,4\n20.07.2026 00:05;44,1;55,3\n', ';', ','],
    ['tabs with decimal commas', '20.07.2026 00:00\t44,2\t55,4\n20.07.2026 00:05\t44,1\t55,3\n', '\t', ','],
    ['pipes', '2026-07-20 00:00|44.2|55.4\n2026-07-20 00:05|44.1|55.3\n', '|', '.'],
    ['commas with quoted thousands', '2026-07-20 00:00,"1,044.2",55.4\n2026-07-20 00:05,"1,044.1",55.3\n', ',', '.'],
    [
      'commas with only whole thousands',
      '2026-07-20 00:00,"1,044","2,055"\n2026-07-20 00:05,"1,043","2,056"\n',
      ',',
      '.',
    ],
    [
      'semicolons with points and grouped thousands',
      '2026-07-20 00:00;1,044.2;55.4\n2026-07-20 00:05;1,044.1;55.3\n',
      ';',
      '.',
    ],
    ['points as thousands', '20.07.2026 00:00;1.044,25;55,4\n20.07.2026 00:05;1.044,15;55,3\n', ';', ','],
  ])('%s', (_, rows, delimiter, decimal) => {
    const heading = ['time', 'a', 'b'].join(delimiter);
    expect(recogniseTable(`${heading}\n${rows}`, true).dialect).toMatchObject({ delimiter, decimal });
  });

  test('a preamble of key and value lines is no heading, and a blank line is passed over', () => {
    const text = 'Report,Trend\nFrom,07/20/2026\n\nTimestamp,a,b,c\n07/20/2026 00:00,1,2,3\n07/20/2026 00:05,1,2,3\n';
    expect(previewOf(text).dialect).toMatchObject({ headerRow: 4, firstDataRow: 5 });
  });

  test('line ends of old programs, a byte-order mark, UTF-16', () => {
    const text = withTimes(['2026-07-20 00:00', '2026-07-20 00:05']);
    for (const [bytes, encoding] of [
      [text.replaceAll('\n', '\r'), 'utf-8'],
      [`\ufeff${text}`, 'utf-8'],
      [utf16Of(text, true, true), 'utf-16le'],
    ] as const) {
      const preview = previewOf(bytes);
      expect(preview.columns.map(({ column }) => column)).toEqual(['CHWS T']);
      expect(preview.dialect.encoding).toBe(encoding);
      expect(preview.problems).toEqual([]);
    }
  });

  test('the cut last row of a head that is not the whole file is neither read nor a problem', () => {
    const whole = tableOf({ 'CHWS T': (m) => m.tps, 'CHWR T': (m) => m.tsr }, { rows: 50 });
    const preview = previewOf(whole.slice(0, -15), { complete: false });
    expect(preview.firstRows).toBe(49);
    expect(preview.problems).toEqual([]);
  });

  test('equal headings have equal fingerprints, whatever their case, spacing or delimiter; other units have others', () => {
    const a = previewOf('Time,CHWS T\n2026-07-20 00:00,44.2\n');
    const b = previewOf('time; chws  t\n2026-07-21 00:00;44,3\n');
    expect(a.fingerprint).toMatch(/^[0-9a-f]{64}$/);
    expect(b.fingerprint).toBe(a.fingerprint);
    expect(headingFingerprint(['a', 'b'], ['F', 'gpm'])).not.toBe(headingFingerprint(['a', 'b'], ['C', 'gpm']));
    expect(headingFingerprint(['a', 'b'], null)).not.toBe(headingFingerprint(['b', 'a'], null));
  });
});

describe('where the time stands', () => {
  test.each<[string, string[], string]>([
    [
      'a day over 12 late in the file settles month first',
      days(14, (d, c) => `07/${two(d)}/2026 ${c}`),
      'month/day/year',
    ],
    [
      'a day over 12 late in the file settles day first',
      days(14, (d, c) => `${two(d)}/07/2026 ${c}`),
      'day/month/year',
    ],
    [
      'with no day over 12, even distances settle month first',
      days(9, (d, c) => `07/${two(d)}/2026 ${c}`),
      'month/day/year',
    ],
    [
      'with no day over 12, even distances settle day first',
      days(9, (d, c) => `${two(d)}/07/2026 ${c}`),
      'day/month/year',
    ],
    ['points mean day first', ['05.07.2026 00:00', '05.07.2026 00:05'], 'day/month/year'],
    ['month names', ['05-Jul-26 12:00:00 AM', '05-Jul-26 12:05:00 AM'], 'day/month/year'],
    ['month names in front', ['"Jul 5, 2026 12:00 AM"', '"Jul 5, 2026 12:05 AM"'], 'month/day/year'],
    ['ISO with offset', ['2026-07-05T00:00:00-06:00', '2026-07-05T00:05:00-06:00'], 'iso'],
    ['ISO without offset', ['2026-07-05 00:00', '2026-07-05 00:05'], 'iso'],
    ['year first with slashes', ['2026/07/05 00:00', '2026/07/05 00:05'], 'year/month/day'],
    ['hour 24', ['07/25/2026 23:59', '07/25/2026  24:00:00', '07/26/2026 00:01'], 'month/day/year'],
    ['epoch seconds', ['1784505900', '1784506200', '1784506500', '1784506800'], 'epoch-s'],
    ['epoch milliseconds', ['1784505900000', '1784506200000', '1784506500000', '1784506800000'], 'epoch-ms'],
    ['spreadsheet serials', ['46223', '46223.0034722', '46223.0069444', '46223.0104167'], 'spreadsheet-serial'],
  ])('%s', (_, times, form) => {
    const preview = previewOf(withTimes(times));
    // Days that end with hour 24 and never begin with 00:00 are stamped at their ends.
    const ends = _ === 'hour 24' ? { stamps: 'end' } : {};
    expect(preview.timestamp).toEqual({ columns: ['Time'], form, ...ends });
    expect(preview.problems.filter(({ code }) => code !== 'missing-hour' && code !== 'end-stamps')).toEqual([]);
  });

  test('one ambiguous day is read as the zone has it, and the doubt is a warning', () => {
    const text = withTimes(['07/08/2026 00:00', '07/08/2026 00:05', '07/08/2026 00:10']);
    const american = previewOf(text);
    expect(american.timestamp.form).toBe('month/day/year');
    expect(american.problems).toEqual([
      {
        code: 'day-or-month',
        severity: 'warning',
        message:
          '"07/08/2026 00:00" can be read with the month or the day first. Read as month/day/year because the plant\'s zone is America/New_York; check it.',
        row: 2,
        column: 'Time',
        count: 1,
      },
    ]);
    expect(previewOf(text, { timeZone: 'Europe/London' }).timestamp.form).toBe('day/month/year');
  });

  test('a date column and a time column are read together', () => {
    const text = 'Date,Time,CHWS T\n07/20/2026,11:55 PM,44.1\n07/21/2026,12:00 AM,44.2\n07/21/2026,12:05 AM,44.3\n';
    const preview = previewOf(text);
    expect(preview).toMatchObject({ timestamp: { columns: ['Date', 'Time'], form: 'month/day/year' }, stepMinutes: 5 });
    expect(preview.columns.map(({ column }) => column)).toEqual(['CHWS T']);
  });

  test('the column named so is the time even when another holds times, which is left out', () => {
    const text =
      'Modified date,CHWS T,Timestamp\n2026-08-01 10:00,44.1,2026-07-20 00:00\n2026-08-01 10:00,44.2,2026-07-20 00:05\n';
    const preview = previewOf(text);
    expect(preview.timestamp.columns).toEqual(['Timestamp']);
    expect(preview.columns[0]).toMatchObject({
      column: 'Modified date',
      role: 'ignore',
      reason: 'A further column of times.',
    });
  });

  test.each([
    [1, 1],
    [5, 5],
    [15, 15],
    [60, 60],
  ])('rows %d minutes apart have that step, although some are missing', (step) => {
    const times = Array.from({ length: 40 }, (_, i) => i)
      .filter((i) => i % 9 !== 4)
      .map((i) => monthFirst(i * step));
    expect(previewOf(withTimes(times)).stepMinutes).toBe(step);
  });

  test('ten-second rows have a step of a sixth of a minute, and a lone row has none', () => {
    const times = Array.from({ length: 30 }, (_, i) => `2026-07-20 00:${two(Math.floor(i / 6))}:${two((i % 6) * 10)}`);
    expect(previewOf(withTimes(times)).stepMinutes).toBeCloseTo(1 / 6, 10);
    expect(previewOf(withTimes(['2026-07-20 00:00'])).stepMinutes).toBeNull();
  });
});

test('problems of the head are those the reader will report', () => {
  const text = `Time,Pri CHWS T\n${monthFirst(0)},44.1\n${monthFirst(1)},Bad Input\n${monthFirst(2)}\n${monthFirst(3)},44.2\n${monthFirst(3)},44.3\n`;
  expect(previewOf(text).problems.map(({ row, severity, message }) => `${row} ${severity}: ${message}`)).toEqual([
    '3 error: "Bad Input" is not a number. Read as missing.',
    '4 error: The row has 1 cell where the heading has 2. Left out.',
    '6 warning: 07/20/2026 00:03 comes twice with other values. The later row is kept.',
  ]);
});
