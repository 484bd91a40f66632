import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { clockText, stampText } from '@/lib/trends/stamp-text';
import { StampParser } from '@/lib/trends/timestamps';
import type { TimestampForm } from '@/lib/trends';

function parsed(form: TimestampForm, text: string, decimal: '.' | ',' = '.'): string | null {
  const parser = new StampParser(form, decimal);
  if (!parser.parse(text)) return null;
  const iso = new Date(parser.ms).toISOString().replace('.000Z', '');
  return parser.hasOffset ? `${iso}Z` : iso;
}

describe('StampParser reads', () => {
  test.each<[TimestampForm, string, string]>([
    ['iso', '2026-07-20T00:05:00', '2026-07-20T00:05:00'],
    ['iso', '2026-07-20 00:05', '2026-07-20T00:05:00'],
    ['iso', '2026-07-20', '2026-07-20T00:00:00'],
    ['iso', '2026-07-20T00:05:00Z', '2026-07-20T00:05:00Z'],
    ['iso', '2026-07-20T00:05:00.250-06:00', '2026-07-20T06:05:00.250ZZ'],
    ['iso', '2026-07-20T00:05:00+0530', '2026-07-19T18:35:00Z'],
    ['iso', '2026-07-20T00:05:00+02', '2026-07-19T22:05:00Z'],
    ['iso', '2026-07-20T00:05-06:00[America/Denver]', '2026-07-20T06:05:00Z'],
    ['iso', '20260720T000500Z', '2026-07-20T00:05:00Z'],
    ['iso', '2026-07-20 24:00:00', '2026-07-21T00:00:00'],
    ['iso', '20260828T0005', '2026-08-28T00:05:00'],
    ['iso', '20260828 000530', '2026-08-28T00:05:30'],
    ['iso', '20260828T000530.25Z', '2026-08-28T00:05:30.250ZZ'],
    ['iso', '202608280005', '2026-08-28T00:05:00'],
    ['iso', '20260828000530', '2026-08-28T00:05:30'],
    ['iso', '2026-08-28-00.05.00', '2026-08-28T00:05:00'],
    ['iso', '2026-08-28-00.05.00.123456', '2026-08-28T00:05:00.123Z'],
    ['iso', '2026-08-28_00:05', '2026-08-28T00:05:00'],
    ['iso', '2026-08-28 00:05:00,5', '2026-08-28T00:05:00.500Z'],
    ['iso', '2026-08-28T00:05:00z', '2026-08-28T00:05:00Z'],
    ['iso', '2026-08-28 00:05 UTC+2', '2026-08-27T22:05:00Z'],
    ['iso', '\u00a02026-08-28\u00a000:05\r', '2026-08-28T00:05:00'],
    ['year/month/day', '2026/7/20 0:05', '2026-07-20T00:05:00'],
    ['year/month/day', '2026.07.20 00:05:30', '2026-07-20T00:05:30'],
    ['month/day/year', '7/20/2026 0:05', '2026-07-20T00:05:00'],
    ['month/day/year', '07/20/26 12:05 AM', '2026-07-20T00:05:00'],
    ['month/day/year', '07/20/2026 12:05:00 PM', '2026-07-20T12:05:00'],
    ['month/day/year', '07/20/2026 1:05 p.m.', '2026-07-20T13:05:00'],
    ['month/day/year', '07/20/2026  24:00:00', '2026-07-21T00:00:00'],
    ['month/day/year', '07/20/2026 12:05AM', '2026-07-20T00:05:00'],
    ['month/day/year', '07/20/2026 1:05:30pm', '2026-07-20T13:05:30'],
    ['month/day/year', '07/20/2026 12:00 a.m.', '2026-07-20T00:00:00'],
    ['month/day/year', '07/20/2026 12:00 P.M.', '2026-07-20T12:00:00'],
    ['month/day/year', '07/20/2026 1:05 p. m.', '2026-07-20T13:05:00'],
    ['month/day/year', '07/20/2026 1:05P', '2026-07-20T13:05:00'],
    ['month/day/year', '07/20/2026 1 PM', '2026-07-20T13:00:00'],
    ['month/day/year', '7/4/69 0:05', '2069-07-04T00:05:00'],
    ['month/day/year', '7/4/70 0:05', '1970-07-04T00:05:00'],
    ['month/day/year', '08/28/26 FRI 00:05', '2026-08-28T00:05:00'],
    ['month/day/year', 'Fri Aug 28 00:05:00 2026', '2026-08-28T00:05:00'],
    ['month/day/year', 'Fri Aug 28 00:05:00 MDT 2026', '2026-08-28T06:05:00Z'],
    ['month/day/year', '12/31/2026 24:00', '2027-01-01T00:00:00'],
    ['month/day/year', 'Jul 20, 2026 1:05 PM', '2026-07-20T13:05:00'],
    ['month/day/year', 'Monday, July 20, 2026 13:05', '2026-07-20T13:05:00'],
    ['day/month/year', '20/07/2026 13:05', '2026-07-20T13:05:00'],
    ['day/month/year', '20.07.2026 13:05:00', '2026-07-20T13:05:00'],
    ['day/month/year', '20-Jul-26 1:05:00 PM EDT', '2026-07-20T17:05:00Z'],
    ['day/month/year', 'Mon 20 Jul 2026 13:05', '2026-07-20T13:05:00'],
    ['day/month/year', '20/Jul/2026:13:05:00 -0600', '2026-07-20T19:05:00Z'],
    ['day/month/year', '20/07/2026 13:05 UTC', '2026-07-20T13:05:00Z'],
    ['day/month/year', '3. Dez 1999 0:00', '1999-12-03T00:00:00'],
    ['day/month/year', '28-août-2026 00:05', '2026-08-28T00:05:00'],
    ['day/month/year', '28 ene 2026 00:05', '2026-01-28T00:05:00'],
    ['day/month/year', 'Fr 28.08.2026 00:05', '2026-08-28T00:05:00'],
    ['day/month/year', '28.08.2026 13.05', '2026-08-28T13:05:00'],
    ['day/month/year', '28.08.2026, 13:05', '2026-08-28T13:05:00'],
    ['epoch-s', '1784505900', '2026-07-20T00:05:00Z'],
    ['epoch-s', '1784505900.0', '2026-07-20T00:05:00Z'],
    ['epoch-s', '1.7845059e9', '2026-07-20T00:05:00Z'],
    ['epoch-s', '1784505900.250', '2026-07-20T00:05:00.250ZZ'],
    ['epoch-ms', '1784505900000', '2026-07-20T00:05:00Z'],
    ['epoch-ms', '1.7845059E+12', '2026-07-20T00:05:00Z'],
    ['epoch-ms', '1784505900000000', '2026-07-20T00:05:00Z'],
    ['epoch-ms', '1784505900000000000', '2026-07-20T00:05:00Z'],
    ['spreadsheet-serial', '46223', '2026-07-20T00:00:00'],
    ['spreadsheet-serial', '46223.0034722', '2026-07-20T00:05:00'],
    ['spreadsheet-serial', '46223 0.0034722', '2026-07-20T00:05:00'],
    ['spreadsheet-serial', '46223 13:05', '2026-07-20T13:05:00'],
  ])('%s %j as %s', (form, text, expected) => {
    expect(parsed(form, text)).toBe(expected);
  });

  test('a spreadsheet time with a decimal comma', () => {
    expect(parsed('spreadsheet-serial', '46223,5', ',')).toBe('2026-07-20T12:00:00');
  });

  test.each<[TimestampForm, string]>([
    ['iso', ''],
    ['iso', 'total'],
    ['iso', '2026-13-01 00:00'],
    ['iso', '2026-02-29 00:00'],
    ['iso', '26-07-20 00:00'],
    ['month/day/year', '20/07/2026 00:00'],
    ['day/month/year', '07/20/2026 00:00'],
    ['month/day/year', '7/20/2026 24:01'],
    ['month/day/year', '7/20/2026 13:61'],
    ['month/day/year', '7/20/2026 25:00'],
    ['month/day/year', '7/20/2026 7'],
    ['month/day/year', '7/20/2026 24:00 PM'],
    ['month/day/year', '7/20/2026 13:05 AM'],
    ['month/day/year', 'Decoupler 1 2026'],
    ['iso', '2026-07-20T00:05:00+16:00'],
    ['iso', '2026-07-20 00:05 XYZ'],
    ['iso', '2026072000050'],
    ['iso', '20261320'],
    ['day/month/year', '12:05'],
    ['month/day/year', '7/20 00:05'],
    ['month/day/year', '08/28  00:01:00'],
    ['day/month/year', '28.08. 13:05'],
    ['day/month/year', '20/07-2026'],
    ['month/day/year', '7/20/2026 00:05 what'],
    ['epoch-s', '1784505900000'],
    ['epoch-ms', '1784505900'],
    ['spreadsheet-serial', '12'],
    ['spreadsheet-serial', ' '],
  ])('no time of the form %s from %j', (form, text) => {
    expect(parsed(form, text)).toBeNull();
  });

  test('month 17 is refused although the same date number was met before', () => {
    const parser = new StampParser('month/day/year');
    expect(parser.parse('1/5/2027 00:00')).toBe(true);
    expect(parser.parse('17/5/2026 00:00')).toBe(false);
  });
});

test('every calendar form reads back what a clock shows, for any second of 1971 to 2069', () => {
  const two = (value: number) => String(value).padStart(2, '0');
  const second = fc.integer({ min: 31_536_000, max: 3_124_223_999 });
  fc.assert(
    fc.property(second, (seconds) => {
      const ms = seconds * 1000;
      const d = new Date(ms);
      const [y, m, day] = [d.getUTCFullYear(), d.getUTCMonth() + 1, d.getUTCDate()];
      const time = `${two(d.getUTCHours())}:${two(d.getUTCMinutes())}:${two(d.getUTCSeconds())}`;
      const hour12 = d.getUTCHours() % 12 || 12;
      const half = `${hour12}:${two(d.getUTCMinutes())}:${two(d.getUTCSeconds())} ${d.getUTCHours() < 12 ? 'AM' : 'PM'}`;
      const read = (form: TimestampForm, text: string) => {
        const parser = new StampParser(form);
        return parser.parse(text) ? parser.ms : null;
      };
      expect(read('iso', `${y}-${two(m)}-${two(day)}T${time}`)).toBe(ms);
      expect(read('year/month/day', `${y}/${m}/${day} ${time}`)).toBe(ms);
      expect(read('month/day/year', `${m}/${day}/${y} ${half}`)).toBe(ms);
      expect(read('day/month/year', `${two(day)}.${two(m)}.${two(y % 100)} ${time}`)).toBe(
        y <= 2069 && y >= 1970 ? ms : null,
      );
      expect(read('spreadsheet-serial', String(ms / 86_400_000 + 25_569))).toBe(ms);
    }),
  );
});

test('sentences write a time as the file does, without seconds when there are none', () => {
  const ms = Date.UTC(2026, 6, 24, 3, 10);
  expect(stampText(ms, 'month/day/year')).toBe('07/24/2026 03:10');
  expect(stampText(ms, 'day/month/year')).toBe('24/07/2026 03:10');
  expect(stampText(ms, 'epoch-s')).toBe('2026-07-24 03:10');
  expect(clockText(ms + 5000)).toBe('03:10:05');
});
