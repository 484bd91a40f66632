import { describe, expect, test } from 'vitest';
import * as time from '@/lib/client/format-time';

const NEW_YORK = 'America/New_York';
const ms = (iso: string) => Date.parse(iso);
/** Spaces that do not break, as plain ones. */
const plain = (text: string) => text.replaceAll('\u00a0', ' ');

test('times are the plant’s own: the same instant is another day elsewhere', () => {
  const instant = ms('2026-07-25T02:30:00Z');
  expect(plain(time.formatDayTime(instant, NEW_YORK))).toBe('Fri 24 Jul 22:30');
  expect(plain(time.formatDayTime(instant, 'Asia/Kolkata'))).toBe('Sat 25 Jul 08:00');
});

test('midnight is 00:00, never 24:00', () => {
  expect(time.formatClock(ms('2026-07-24T04:00:00Z'), NEW_YORK)).toBe('00:00');
});

test('September is written Sep', () => {
  expect(plain(time.formatDay(ms('2026-09-01T12:00:00Z'), 'UTC'))).toBe('Tue 1 Sep');
});

describe('clock changes', () => {
  // New York 2026: clocks go forward on 8 March at 02:00, back on 1 November at 02:00.
  test('days are 23 and 25 hours apart where clocks change', () => {
    const spring = time.localDayStarts(ms('2026-03-07T05:00:00Z'), ms('2026-03-10T04:00:00Z'), NEW_YORK);
    expect(spring.map((start, index) => (start - (spring[index - 1] ?? start)) / 3_600_000)).toEqual([0, 24, 23]);
    const autumn = time.localDayStarts(ms('2026-10-31T04:00:00Z'), ms('2026-11-03T05:00:00Z'), NEW_YORK);
    expect(autumn.map((start, index) => (start - (autumn[index - 1] ?? start)) / 3_600_000)).toEqual([0, 24, 25]);
  });

  test('the second run of a repeated hour says so', () => {
    expect(plain(time.formatDayTime(ms('2026-11-01T05:00:00Z'), NEW_YORK))).toBe('Sun 1 Nov 01:00');
    expect(plain(time.formatDayTime(ms('2026-11-01T06:00:00Z'), NEW_YORK))).toBe('Sun 1 Nov 01:00, second');
  });

  test('a day whose midnight is skipped begins with its first instant', () => {
    // Chile 2026: clocks go forward on 6 September at 00:00, so that day begins at 01:00.
    const start = time.startOfLocalDay('2026-09-06', 'America/Santiago');
    expect(time.localDay(start, 'America/Santiago')).toBe('2026-09-06');
    expect(time.localDay(start - 1, 'America/Santiago')).toBe('2026-09-05');
  });
});

test('a local hour begins on the clock’s hour in a zone that is half an hour off', () => {
  const inside = ms('2026-07-24T10:47:12.345Z');
  expect(time.isoInstant(time.startOfLocalHour(inside, 'Asia/Kolkata'))).toBe('2026-07-24T10:30:00Z');
  expect(time.isoInstant(time.startOfLocalHour(inside, NEW_YORK))).toBe('2026-07-24T10:00:00Z');
});

test('from and to may be an instant or a local day', () => {
  expect(time.momentMs('2026-07-24', NEW_YORK)).toBe(ms('2026-07-24T04:00:00Z'));
  expect(time.momentMs('2026-07-24T00:00:00+02:00', NEW_YORK)).toBe(ms('2026-07-23T22:00:00Z'));
  expect(time.momentMs('yesterday', NEW_YORK)).toBeNaN();
});

test('a period of whole days is named by its first and last, with nothing said twice', () => {
  const period = (from: string, to: string) =>
    plain(time.formatPeriod(time.startOfLocalDay(from, NEW_YORK), time.startOfLocalDay(to, NEW_YORK), NEW_YORK));
  expect(period('2026-07-13', '2026-07-27')).toBe('13 – 26 Jul 2026');
  expect(period('2026-06-28', '2026-07-05')).toBe('28 Jun – 4 Jul 2026');
  expect(period('2025-12-29', '2026-01-05')).toBe('29 Dec 2025 – 4 Jan 2026');
  expect(period('2026-07-24', '2026-07-25')).toBe('24 Jul 2026');
});

test('a stretch within a day gives the day once', () => {
  const at = (clock: string, day = '24') => ms(`2026-07-${day}T${clock}:00-04:00`);
  expect(plain(time.formatStretch(at('13:00'), at('18:00'), NEW_YORK))).toBe('Fri 24 Jul 13:00 – 18:00');
  expect(plain(time.formatStretch(at('22:00'), at('03:00', '25'), NEW_YORK))).toBe(
    'Fri 24 Jul 22:00 – Sat 25 Jul 03:00',
  );
});

test('the title of an hour', () => {
  expect(plain(time.formatHourTitle('2026-07-24T19:00:00Z', NEW_YORK))).toBe('Fri 24 Jul 2026, 15:00 – 16:00');
});
