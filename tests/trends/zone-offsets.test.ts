import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { StampParser } from '@/lib/trends/timestamps';
import { LocalClock } from '@/lib/trends/zone-offsets';
import { wallTime } from './support';

const MINUTE_MS = 60_000;

/** Wall times of a file to UTC, in its order. */
function toUtc(timeZone: string, walls: readonly string[], stepMinutes: number, newestFirst = false) {
  const clock = new LocalClock(timeZone);
  const parser = new StampParser('iso');
  return walls.map((wall) => {
    if (!parser.parse(wall)) throw new Error(wall);
    const utc = new Date(clock.toUtc(parser.ms, newestFirst, stepMinutes * MINUTE_MS)).toISOString().slice(0, 16);
    return `${utc} ${clock.kind}`;
  });
}

describe('LocalClock', () => {
  const ZONES = [
    'America/Denver',
    'America/New_York',
    'America/Sao_Paulo',
    'America/St_Johns',
    'Asia/Kolkata',
    'Asia/Kathmandu',
    'Australia/Lord_Howe',
    'Australia/Adelaide',
    'Pacific/Chatham',
    'Europe/Berlin',
    'Europe/Dublin',
    'Africa/Casablanca',
    'UTC',
  ];

  test('a complete log in wall time comes back to the instants it was written at, across any change of the clocks, either way up', () => {
    // Steps that divide the repeated stretch; the log starts on a whole step, up to two days before a half day of change.
    const step = fc.constantFrom(1, 5, 10, 15, 30);
    const early = fc.integer({ min: 0, max: 192 });
    const pick = fc.nat();
    fc.assert(
      fc.property(
        fc.constantFrom(...ZONES),
        pick,
        early,
        step,
        fc.boolean(),
        (timeZone, nth, quarters, stepMinutes, newestFirst) => {
          const stepMs = stepMinutes * MINUTE_MS;
          const changes = changesOf(timeZone);
          const aboutMs = (changes[nth % changes.length] ?? Date.UTC(2026, 6, 1)) - quarters * 15 * MINUTE_MS;
          const fromMs = Math.floor(aboutMs / stepMs) * stepMs;
          const rows = Math.min(1500, (3 * 1440) / stepMinutes);
          const instants = Array.from({ length: rows }, (_, i) => fromMs + i * stepMs);
          // A log may begin anywhere but inside the repeated stretch, where nobody can know which pass it is.
          fc.pre(!nearChange(timeZone, instants[0]!) && !nearChange(timeZone, instants.at(-1)!));
          if (newestFirst) instants.reverse();
          const clock = new LocalClock(timeZone);
          const parser = new StampParser('iso');
          for (const ms of instants) {
            const read = parser.parse(wallTime(ms, timeZone)) ? clock.toUtc(parser.ms, newestFirst, stepMs) : null;
            if (read !== ms) expect([wallTime(ms, timeZone), read]).toEqual([wallTime(ms, timeZone), ms]);
          }
        },
      ),
      { numRuns: 80 },
    );
  }, 60_000);

  /** Half days of 2026 at the end of which the offset is another. */
  const changesOf = (timeZone: string) =>
    Array.from({ length: 730 }, (_, i) => Date.UTC(2026, 0, 1) + i * 43_200_000).filter(
      (ms) => offset(timeZone, ms) !== offset(timeZone, ms + 43_200_000),
    );
  const nearChange = (timeZone: string, ms: number) =>
    new Set([-7_200_000, 0, 7_200_000].map((shift) => offset(timeZone, ms + shift))).size > 1;
  const offset = (timeZone: string, ms: number) => Date.parse(`${wallTime(ms, timeZone).replace(' ', 'T')}Z`) - ms;

  test.each(['America/Denver', 'America/New_York', 'Europe/Berlin', 'Australia/Lord_Howe'])(
    'every minute of the two days around each change of 2026 in %s comes back',
    (timeZone) => {
      const year = Array.from({ length: 365 * 24 }, (_, i) => Date.UTC(2026, 0, 1) + i * 3_600_000);
      const changes = year.filter((ms) => offset(timeZone, ms) !== offset(timeZone, ms + 3_600_000));
      expect(changes).toHaveLength(2);
      for (const change of changes) {
        const clock = new LocalClock(timeZone);
        const parser = new StampParser('iso');
        for (let ms = change - 86_400_000; ms < change + 86_400_000; ms += MINUTE_MS) {
          parser.parse(wallTime(ms, timeZone));
          const read = clock.toUtc(parser.ms, false, MINUTE_MS);
          if (read !== ms) expect([wallTime(ms, timeZone), read]).toEqual([wallTime(ms, timeZone), ms]);
        }
      }
    },
    60_000,
  );

  test('the repeated hour: the second pass in the file is the later hour', () => {
    const walls = [
      '2026-11-01 00:30',
      '2026-11-01 01:00',
      '2026-11-01 01:30',
      '2026-11-01 01:00',
      '2026-11-01 01:30',
      '2026-11-01 02:00',
    ];
    expect(toUtc('America/Denver', walls, 30)).toEqual([
      '2026-11-01T06:30 plain',
      '2026-11-01T07:00 repeated',
      '2026-11-01T07:30 repeated',
      '2026-11-01T08:00 repeated',
      '2026-11-01T08:30 repeated',
      '2026-11-01T09:00 plain',
    ]);
  });

  test('the repeated hour of a log with the newest row first', () => {
    const walls = [
      '2026-11-01 02:00',
      '2026-11-01 01:30',
      '2026-11-01 01:00',
      '2026-11-01 01:30',
      '2026-11-01 01:00',
      '2026-11-01 00:30',
    ];
    expect(toUtc('America/Denver', walls, 30, true).map((each) => each.slice(11, 16))).toEqual([
      '09:00',
      '08:30',
      '08:00',
      '07:30',
      '07:00',
      '06:30',
    ]);
  });

  test('in an hourly log the same time twice is the repeated hour', () => {
    const walls = ['2026-11-01 00:00', '2026-11-01 01:00', '2026-11-01 01:00', '2026-11-01 02:00'];
    expect(toUtc('America/Denver', walls, 60).map((each) => each.slice(11, 16))).toEqual([
      '06:00',
      '07:00',
      '08:00',
      '09:00',
    ]);
  });

  test('in a finer log the same time twice is a repeated row, and a row a step late does not start the second pass', () => {
    const walls = ['2026-11-01 01:10', '2026-11-01 01:10', '2026-11-01 01:15', '2026-11-01 01:10', '2026-11-01 01:20'];
    expect(toUtc('America/Denver', walls, 5).map((each) => each.slice(11, 16))).toEqual([
      '07:10',
      '07:10',
      '07:15',
      '07:10',
      '07:20',
    ]);
  });

  test('the missing hour is read with the offset from before the change', () => {
    expect(toUtc('America/Denver', ['2026-03-08 01:59', '2026-03-08 02:30', '2026-03-08 03:00'], 1)).toEqual([
      '2026-03-08T08:59 plain',
      '2026-03-08T09:30 missing',
      '2026-03-08T09:00 plain',
    ]);
  });

  test('half an hour on Lord Howe Island', () => {
    // 2026-04-05 at 02:00 the clocks go back to 01:30.
    const walls = [
      '2026-04-05 01:15',
      '2026-04-05 01:30',
      '2026-04-05 01:45',
      '2026-04-05 01:30',
      '2026-04-05 01:45',
      '2026-04-05 02:00',
    ];
    expect(toUtc('Australia/Lord_Howe', walls, 15).map((each) => each.slice(0, 16))).toEqual([
      '2026-04-04T14:15',
      '2026-04-04T14:30',
      '2026-04-04T14:45',
      '2026-04-04T15:00',
      '2026-04-04T15:15',
      '2026-04-04T15:30',
    ]);
  });

  test('a zone that does not exist is refused by name', () => {
    expect(() => new LocalClock('Mars/Olympus')).toThrow(
      new RangeError('LocalClock: unknown time zone "Mars/Olympus"'),
    );
  });
});
