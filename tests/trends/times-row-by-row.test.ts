import { describe, expect, test } from 'vitest';
import { StampParser } from '@/lib/trends/timestamps';
import type { TimestampForm } from '@/lib/trends';

/** What one parser makes of the rows of a file: minutes as ISO, null where refused. */
function read(form: TimestampForm, texts: readonly string[], year: number | null = null) {
  const parser = new StampParser(form, '.', year);
  return texts.map((text) => {
    if (!parser.parse(text)) return null;
    return new Date(parser.ms).toISOString().slice(0, 16) + (parser.hasOffset ? 'Z' : '');
  });
}

describe('a form without a year', () => {
  test.each<[TimestampForm, string, string]>([
    ['month/day', '08/28  00:05:00', '2026-08-28T00:05'],
    ['month/day', '08/28  24:00:00', '2026-08-29T00:00'],
    ['month/day', '12/31 24:00', '2027-01-01T00:00'],
    ['month/day', '8-28 0:05', '2026-08-28T00:05'],
    ['month/day', '8/28 12:05 AM', '2026-08-28T00:05'],
    ['month/day', '08/28', '2026-08-28T00:00'],
    ['month/day', 'Aug 28 00:05', '2026-08-28T00:05'],
    ['month/day', 'Fri Aug 28, 00:05', '2026-08-28T00:05'],
    ['month/day', '08/28T00:05Z', '2026-08-28T00:05Z'],
    ['day/month', '28/08 00:05', '2026-08-28T00:05'],
    ['day/month', '28.08. 00:05', '2026-08-28T00:05'],
    ['day/month', '28.08 00:05', '2026-08-28T00:05'],
    ['day/month', '28.08.', '2026-08-28T00:00'],
    ['day/month', '28-Aug 00:05', '2026-08-28T00:05'],
    ['day/month', '28. Aug. 00:05', '2026-08-28T00:05'],
  ])('%s reads %j', (form, text, expected) => {
    expect(read(form, [text], 2026)).toEqual([expected]);
  });

  test.each<[TimestampForm, string]>([
    ['month/day', '08/28/2026 00:05'],
    ['month/day', '08/28/2026'],
    ['month/day', '2026-08-28 00:05'],
    ['month/day', 'Aug 28 2026'],
    ['month/day', '28/08 00:05'],
    ['month/day', '8.12'],
    ['month/day', '02/29 00:05'],
    ['month/day', '02/30 00:05'],
    ['day/month', '28.08.2026'],
    ['day/month', '28.08.2026 00:05'],
    ['day/month', '12,8'],
    ['day/month', '12 8'],
    ['month/day', 'Decoupler 1'],
  ])('%s refuses %j', (form, text) => {
    expect(read(form, [text], 2026)).toEqual([null]);
  });

  test('cannot be read when nobody says which year; a plan without it is refused', () => {
    expect(read('month/day', ['08/28 00:05'])).toEqual([null]);
    expect(() => StampParser.of({ columns: ['t'], form: 'month/day' }, '.')).toThrow(
      new RangeError('StampParser: times of the form month/day need the year of the first row'),
    );
    expect(StampParser.of({ columns: ['t'], form: 'month/day', year: 2026 }, '.').parse('08/28 00:05')).toBe(true);
  });

  test('goes on to the next year from December to January', () => {
    expect(read('month/day', ['12/31 23:55', '12/31 24:00', '01/01 00:05', '12/31 23:55'], 2025)).toEqual([
      '2025-12-31T23:55',
      '2026-01-01T00:00',
      '2026-01-01T00:05',
      '2025-12-31T23:55',
    ]);
  });

  test('goes back from January to December in a file with the newest row first', () => {
    expect(read('day/month', ['01/01 00:05', '01/01 00:00', '31/12 23:55', '30/12 00:00'], 2026)).toEqual([
      '2026-01-01T00:05',
      '2026-01-01T00:00',
      '2025-12-31T23:55',
      '2025-12-30T00:00',
    ]);
  });

  test('a few rows out of order across New Year do not start another year', () => {
    const texts = ['12/31 23:50', '01/01 00:00', '12/31 23:55', '01/01 00:05', '12/30 10:00', '01/02 00:00'];
    expect(read('month/day', texts, 2025).map((each) => each?.slice(0, 4))).toEqual([
      '2025',
      '2026',
      '2025',
      '2026',
      '2025',
      '2026',
    ]);
  });

  test('counts on over many years, leap days where there are any', () => {
    const months = Array.from({ length: 61 }, (_, i) => `${(i % 12) + 1}/1 00:00`);
    expect(read('month/day', months, 2021).at(-1)).toBe('2026-01-01T00:00');
    expect(read('month/day', ['2/28 00:00', '2/29 00:00', '3/1 00:00'], 2024)[1]).toBe('2024-02-29T00:00');
    expect(read('month/day', ['2/28 00:00', '2/29 00:00', '3/1 00:00'], 2025)).toEqual([
      '2025-02-28T00:00',
      null,
      '2025-03-01T00:00',
    ]);
  });

  test('a gap over New Year of less than half a year is bridged', () => {
    expect(read('month/day', ['10/15 00:00', '03/01 00:00'], 2025)[1]).toBe('2026-03-01T00:00');
  });

  test('a weekday decides where a gap leaves the year open', () => {
    // 1 September 2026 is a Tuesday, 1 September 2025 a Monday.
    expect(read('month/day', ['Sat 01/31 00:00', 'Tue 09/01 00:00'], 2026)[1]).toBe('2026-09-01T00:00');
  });
});

describe('a time of day alone', () => {
  test('goes on from the date before it, and rolls on at midnight', () => {
    expect(read('iso', ['2026-07-20 23:50', '23:55', '00:00', '00:05', '2026-07-21 00:10', '00:15'])).toEqual([
      '2026-07-20T23:50',
      '2026-07-20T23:55',
      '2026-07-21T00:00',
      '2026-07-21T00:05',
      '2026-07-21T00:10',
      '2026-07-21T00:15',
    ]);
  });

  test('goes on where the date’s cell is blank, with AM and PM', () => {
    const rows = ['7/20/2026 11:55 PM', ' 12:00 AM', ' 12:05 AM'];
    expect(read('month/day/year', rows)).toEqual(['2026-07-20T23:55', '2026-07-21T00:00', '2026-07-21T00:05']);
  });

  test('hour 24 ends its day', () => {
    expect(read('month/day/year', ['7/20/2026 23:00', '24:00', '01:00', '02:00'])).toEqual([
      '2026-07-20T23:00',
      '2026-07-21T00:00',
      '2026-07-21T01:00',
      '2026-07-21T02:00',
    ]);
  });

  test('over many days with one date', () => {
    const clocks = Array.from({ length: 96 }, (_, i) => `${String(i % 24).padStart(2, '0')}:00`);
    expect(read('iso', ['2026-12-30', ...clocks]).at(-1)).toBe('2027-01-02T23:00');
    expect(read('month/day', ['12/30', ...clocks, '01/03 00:00'], 2026).slice(-2)).toEqual([
      '2027-01-02T23:00',
      '2027-01-03T00:00',
    ]);
  });

  test('rolls back in a file with the newest row first', () => {
    expect(read('iso', ['2026-07-20 00:10', '00:05', '00:00', '23:55', '23:50'])).toEqual([
      '2026-07-20T00:10',
      '2026-07-20T00:05',
      '2026-07-20T00:00',
      '2026-07-19T23:55',
      '2026-07-19T23:50',
    ]);
  });

  test('an hour back, as when clocks change, and a gap forward are of the same day', () => {
    expect(read('iso', ['2026-11-01 01:50', '01:55', '01:00', '20:00'])).toEqual([
      '2026-11-01T01:50',
      '2026-11-01T01:55',
      '2026-11-01T01:00',
      '2026-11-01T20:00',
    ]);
  });

  test('keeps the offset of its date', () => {
    expect(read('iso', ['2026-07-20T23:55-06:00', '00:00', '00:05Z'])).toEqual([
      '2026-07-21T05:55Z',
      '2026-07-21T06:00Z',
      '2026-07-21T00:05Z',
    ]);
  });

  test('of a spreadsheet, as a fraction or with a colon', () => {
    expect(read('spreadsheet-serial', ['46223 0.9965278', ' 0', ' 0.0034722', ' 00:10'])).toEqual([
      '2026-07-20T23:55',
      '2026-07-21T00:00',
      '2026-07-21T00:05',
      '2026-07-21T00:10',
    ]);
  });

  test('is refused before any date, and after a date that could not be read, until the next that can', () => {
    const texts = ['00:05', '12/07/2026 00:00', '00:05', '13/07/2026 00:00', '00:05', '12/08/2026 00:00', '00:05'];
    expect(read('month/day/year', texts)).toEqual([
      null,
      '2026-12-07T00:00',
      '2026-12-07T00:05',
      null,
      null,
      '2026-12-08T00:00',
      '2026-12-08T00:05',
    ]);
  });

  test('goes on over a heading that comes again and a time that cannot be', () => {
    expect(read('iso', ['2026-07-20 00:00', 'Time', '', '00:05', '25:00', '00:10']).slice(3)).toEqual([
      '2026-07-20T00:05',
      null,
      '2026-07-20T00:10',
    ]);
  });

  test('a reading with a point is not a time: 13.05', () => {
    expect(read('day/month/year', ['20.07.2026 13.00', '13.05'])[1]).toBeNull();
  });
});
