import { describe, expect, test } from 'vitest';
import { StampParser } from '@/lib/trends/timestamps';
import { LocalClock } from '@/lib/trends/zone-offsets';
import { messagesOf, planFor, readText, samplesOf, wallTime } from './support';

const MINUTE_MS = 60_000;
const DAY_MS = 86_400_000;

/** Changes of the clocks in 2026, from the tz database: the instant of each. */
const CHANGES: [zone: string, backAt: string, forwardAt: string][] = [
  ['America/Denver', '2026-11-01T08:00Z', '2026-03-08T09:00Z'],
  ['Europe/Berlin', '2026-10-25T01:00Z', '2026-03-29T01:00Z'],
  ['Australia/Sydney', '2026-04-04T16:00Z', '2026-10-03T16:00Z'],
  ['Australia/Lord_Howe', '2026-04-04T15:00Z', '2026-10-03T15:30Z'],
  // Kolkata has no changes: the days on which others have them are plain there.
  ['Asia/Kolkata', '2026-10-25T01:00Z', '2026-03-29T01:00Z'],
];

/** Instants of a log from a day before a change to a day behind it, on whole multiples of the step. */
function instantsAround(change: string, stepMinutes: number, newestFirst: boolean): number[] {
  const stepMs = stepMinutes * MINUTE_MS;
  const fromMs = Math.ceil((Date.parse(change) - DAY_MS) / stepMs) * stepMs;
  const instants = Array.from({ length: (2 * DAY_MS) / stepMs }, (_, i) => fromMs + i * stepMs);
  return newestFirst ? instants.reverse() : instants;
}

/** Rows whose wall time does not come back as the instant it was written at. */
function wrongRows(timeZone: string, instants: readonly number[], stepMinutes: number, newestFirst: boolean) {
  const clock = new LocalClock(timeZone);
  const parser = new StampParser('iso');
  return instants.flatMap((ms) => {
    const wall = wallTime(ms, timeZone);
    parser.parse(wall);
    const read = clock.toUtc(parser.ms, newestFirst, stepMinutes * MINUTE_MS);
    return read === ms ? [] : [{ wall, written: new Date(ms).toISOString(), read: new Date(read).toISOString() }];
  });
}

describe.each(CHANGES)('in %s every row comes back to its instant', (timeZone, backAt, forwardAt) => {
  const cases = [1, 5, 15, 60].flatMap((step) => [false, true].map((newestFirst) => ({ step, newestFirst })));
  test.each(cases)('when clocks go back; a row every $step minutes, newest first: $newestFirst', (given) => {
    const instants = instantsAround(backAt, given.step, given.newestFirst);
    expect(wrongRows(timeZone, instants, given.step, given.newestFirst)).toEqual([]);
  });
  test.each(cases)('when clocks go forward; a row every $step minutes, newest first: $newestFirst', (given) => {
    const instants = instantsAround(forwardAt, given.step, given.newestFirst);
    expect(wrongRows(timeZone, instants, given.step, given.newestFirst)).toEqual([]);
  });
});

describe('a whole file read across the autumn change', () => {
  const lines = (timeZone: string, instants: readonly number[]) =>
    ['time,a', ...instants.map((ms) => `${wallTime(ms, timeZone)},${(ms / MINUTE_MS) % 100_000}`)].join('\n');

  test.each(
    CHANGES.slice(0, 3).flatMap(([timeZone, backAt]) =>
      [5, 15, 60].flatMap((step) => [false, true].map((newestFirst) => ({ timeZone, backAt, step, newestFirst }))),
    ),
  )('$timeZone, $step minutes, newest first: $newestFirst', ({ timeZone, backAt, step, newestFirst }) => {
    const instants = instantsAround(backAt, step, newestFirst);
    const columns = [{ column: 'a', role: 'primaryFlow', unit: 'gpm' } as const];
    const read = readText(lines(timeZone, instants), planFor({ timeZone, stepMinutes: step, columns }));
    const samples = samplesOf(read);
    expect(samples).toHaveLength(instants.length);
    const wrong = samples.filter(([time, value]) => (Date.parse(`${time}Z`) / MINUTE_MS) % 100_000 !== value);
    expect(wrong).toEqual([]);
    expect(messagesOf(read).filter((message) => !message.startsWith('Clocks went back'))).toEqual([]);
  });
});

describe('which pass of the repeated hour', () => {
  const read = (walls: readonly string[], stepMinutes: number, newestFirst = false) => {
    const clock = new LocalClock('America/Denver');
    const parser = new StampParser('iso');
    return walls.map((wall) => {
      parser.parse(wall);
      return new Date(clock.toUtc(parser.ms, newestFirst, stepMinutes * MINUTE_MS)).toISOString().slice(11, 16);
    });
  };

  test('a two-hourly log, which has one row in it, takes the pass that keeps its distance', () => {
    expect(read(['2026-10-31 22:00', '2026-11-01 00:00', '2026-11-01 01:00', '2026-11-01 03:00'], 120)).toEqual([
      '04:00',
      '06:00',
      '08:00',
      '10:00',
    ]);
  });

  test('in a log of changes that was in order so far, a small step back starts the second pass', () => {
    const before = Array.from({ length: 30 }, (_, i) => `2026-10-31 ${10 + Math.floor(i / 3)}:${(i % 3) * 15 + 10}`);
    const walls = [...before, '2026-11-01 01:20', '2026-11-01 01:50', '2026-11-01 01:30', '2026-11-01 02:10'];
    expect(read(walls, 15).slice(-4)).toEqual(['07:20', '07:50', '08:30', '09:10']);
  });

  test('in a log that goes back here and there it does not', () => {
    const before = Array.from({ length: 30 }, (_, i) => `2026-10-31 ${10 + Math.floor(i / 3)}:${50 - (i % 3) * 15}`);
    const walls = [...before, '2026-11-01 01:20', '2026-11-01 01:50', '2026-11-01 01:30', '2026-11-01 02:10'];
    expect(read(walls, 15).slice(-4)).toEqual(['07:20', '07:50', '07:30', '09:10']);
  });

  test('two points that repeat each other hour by hour need a clock each', () => {
    const first = new LocalClock('America/Denver');
    const second = first.another();
    const parser = new StampParser('iso');
    const hours = ['00:00', '01:00', '01:00', '02:00'].map((wall) => {
      parser.parse(`2026-11-01 ${wall}`);
      return [first, second].map((clock) => new Date(clock.toUtc(parser.ms, false, 60 * MINUTE_MS)).getUTCHours());
    });
    expect(hours).toEqual([
      [6, 6],
      [7, 7],
      [8, 8],
      [9, 9],
    ]);
  });
});
