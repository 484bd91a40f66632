import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { DayAligner } from '@/lib/trends/align';
import { DayBuffer, tailOf, type DayTail } from '@/lib/trends/day-buffer';
import { LONGEST_HELD_MS, heldForMs, rhythmOf } from '@/lib/trends/hold-rhythm';
import { mannerOf, seenOf } from '@/lib/trends/hold-manner';
import { DAY_MS, HOUR_MS, MINUTE_MS, SECOND_MS } from '@/lib/trends/timestamps';
import { BLANK } from '@/lib/trends/values';

type Reading = readonly [second: number, value: number];

function bufferOf(readings: readonly Reading[]): DayBuffer {
  const buffer = new DayBuffer(1);
  readings.forEach(([second, value], i) => {
    const base = buffer.addRow(second * SECOND_MS, i + 2);
    buffer.values[base] = value;
  });
  buffer.settle(() => undefined);
  return buffer;
}

function held(readings: readonly Reading[], ageMs: number, stepMinutes: number, before?: DayTail, endMs = DAY_MS) {
  const aligner = new DayAligner(stepMinutes * MINUTE_MS);
  const out = new Float64Array(aligner.slots);
  const tooLong = aligner.align(bufferOf(readings), 0, { kind: 'held', ageMs }, before, endMs, out);
  return { slots: [...out], tooLong };
}

/** Second by second: the last value at or before each, unless it is too old. */
function bruteForce(readings: readonly Reading[], ageMs: number, stepMinutes: number, earlier?: Reading): number[] {
  const sorted = [...(earlier ? [[earlier[0] - 86_400, earlier[1]] as const] : []), ...readings].sort(
    ([a], [b]) => a - b,
  );
  let at = -1;
  const perSlot = stepMinutes * 60;
  return Array.from({ length: 86_400 / perSlot }, (_, slot) => {
    let sum = 0;
    let known = 0;
    for (let second = slot * perSlot; second < (slot + 1) * perSlot; second++) {
      while (at + 1 < sorted.length && sorted[at + 1]![0] <= second) at++;
      const [from, value] = sorted[at] ?? [0, Number.NaN];
      if (Number.isNaN(value) || (second - from) * SECOND_MS >= ageMs) continue;
      sum += value;
      known++;
    }
    return known * 2 >= perSlot ? sum / known : Number.NaN;
  });
}

const readings = fc.uniqueArray(
  fc.tuple(
    fc.integer({ min: 0, max: 86_399 }),
    fc.oneof({ weight: 6, arbitrary: fc.double({ min: -50, max: 50, noNaN: true }) }, fc.constant(Number.NaN)),
  ),
  { selector: ([second]) => second, maxLength: 40 },
);

describe('a column that is logged on change', () => {
  test('equals a second-by-second reference for any record, age, step and last value of the day before', () => {
    fc.assert(
      fc.property(
        readings,
        fc.option(fc.tuple(fc.integer({ min: 0, max: 86_399 }), fc.integer({ min: 0, max: 9 })), { nil: undefined }),
        fc.integer({ min: 30, max: 86_400 }),
        fc.constantFrom(1, 5, 15, 60),
        (record, earlier, ageSeconds, step) => {
          const before = earlier && tailOf(bufferOf([earlier]));
          const { slots } = held(record, ageSeconds * SECOND_MS, step, before);
          const expected = bruteForce(record, ageSeconds * SECOND_MS, step, earlier);
          const wrong = slots.filter((value, slot) => {
            const other = expected[slot]!;
            return Number.isNaN(other) ? !Number.isNaN(value) : !(Math.abs(value - other) < 1e-9);
          });
          expect(wrong).toEqual([]);
        },
      ),
      { numRuns: 60 },
    );
  }, 60_000);

  test('a status that is on for two minutes of a slot of five is 0.4 there, and 1 or 0 to the last bit elsewhere', () => {
    const record: Reading[] = [
      [0, 0],
      [600, 1],
      [720, 0],
    ];
    expect(held(record, DAY_MS, 5).slots.slice(0, 4)).toEqual([0, 0, 0.4, 0]);
    expect(held([[0, 44.1]], DAY_MS, 5).slots.every((value) => value === 44.1)).toBe(true);
  });

  test('a missing value ends the one before it, and nothing is held until the next', () => {
    const record: Reading[] = [
      [0, 5],
      [600, NaN],
      [1200, 7],
    ];
    expect(held(record, DAY_MS, 5).slots.slice(0, 5)).toEqual([5, 5, NaN, NaN, 7]);
  });

  test('nothing is interpolated: between 40 and 50 there is only 40', () => {
    const record: Reading[] = [
      [0, 40],
      [3600, 50],
    ];
    expect(new Set(held(record, DAY_MS, 5).slots)).toEqual(new Set([40, 50]));
  });

  test('a slot known for less than half of its time is missing', () => {
    expect(held([[151, 5]], DAY_MS, 5).slots[0]).toBeNaN();
    expect(held([[150, 5]], DAY_MS, 5).slots[0]).toBe(5);
  });

  test('what is older than its age is left empty and counted with the row it stood in', () => {
    const record: Reading[] = [
      [0, 1],
      [7200, 2],
      [10_800, 3],
    ];
    const { slots, tooLong } = held(record, HOUR_MS, 60);
    expect(slots.slice(0, 5)).toEqual([1, NaN, 2, 3, NaN]);
    expect(tooLong).toEqual({ count: 2, fromMs: 0, row: 2 });
  });

  test('a value does not reach beyond the end of the file’s record, and that is no trouble', () => {
    const { slots, tooLong } = held([[0, 1]], DAY_MS, 60, undefined, 2.5 * HOUR_MS);
    expect(slots.slice(0, 4)).toEqual([1, 1, 1, NaN]);
    expect(tooLong).toBeNull();
  });

  test('unsteady readings under a minute count by the time they stood', () => {
    const record: Reading[] = [
      [0, 10],
      [6, 20],
      [36, 30],
    ];
    expect(held(record, MINUTE_MS, 1).slots[0]).toBeCloseTo((6 * 10 + 30 * 20 + 24 * 30) / 60, 12);
  });
});

describe('how a column is held', () => {
  const minutes = (...times: number[]) => Float64Array.from(times, (minute) => minute * MINUTE_MS);
  /** The rhythm of readings that are all alike, or all different. */
  const alike = (times: readonly number[]) => rhythmOf(minutes(...times), new Float64Array(times.length).fill(44));
  const different = (times: readonly number[]) =>
    rhythmOf(
      minutes(...times),
      Float64Array.from(times, (_, i) => 44 + (i % 2)),
    );
  const every = (distance: number, until: number) =>
    Array.from({ length: Math.floor(until / distance) + 1 }, (_, i) => i * distance);

  test('no age is over a day, which is as far as a day looks back', () => {
    for (const age of Object.values(LONGEST_HELD_MS)) expect(age).toBeLessThanOrEqual(DAY_MS);
    expect(heldForMs('status', 0)).toBe(24 * HOUR_MS);
    expect(heldForMs('temperature', 0)).toBe(12 * HOUR_MS);
  });

  test('a logger that writes every 15 minutes at least is believed for two and a half of them', () => {
    const changes = every(15, 1400).flatMap((minute) => [minute, minute + 4.3 + (minute % 7) / 3]);
    const rhythm = alike([...every(15, 600), ...changes.filter((minute) => minute > 600)]);
    expect(rhythm).toMatchObject({ heartbeatMs: 15 * MINUTE_MS });
    expect(heldForMs('flow', rhythm.heartbeatMs)).toBe(37.5 * MINUTE_MS);
  });

  test('an outage of hours does not hide the heartbeat, and busy changes at random times are none', () => {
    const alive = every(15, 1400).filter((minute) => minute < 500 || minute > 700);
    expect(alike(alive).heartbeatMs).toBe(15 * MINUTE_MS);
    let seed = 1;
    let at = 0;
    const random = Array.from({ length: 200 }, () => {
      seed = (seed * 48_271) % 2_147_483_647;
      at += -Math.log(seed / 2_147_483_647) * 6;
      return at;
    });
    expect(different(random)).toMatchObject({ usualMs: 0, heartbeatMs: 0 });
  });

  test('a log on change that looks every five minutes is held, however often it finds a change; one on a timer is not', () => {
    const looked = every(5, 1400).filter((minute) => minute % 35 !== 0 && minute % 60 !== 0);
    expect(different(looked)).toMatchObject({ usualMs: 0, heartbeatMs: 0 });
    expect(alike(looked)).toMatchObject({ usualMs: 5 * MINUTE_MS });
    const outage = every(5, 1400).filter((minute) => minute < 300 || minute > 480);
    expect(different(outage)).toMatchObject({ usualMs: 5 * MINUTE_MS });
  });

  test('a logger that writes every 3 to 20 seconds is believed for 50', () => {
    let at = 0;
    const seconds = Array.from({ length: 2000 }, (_, i) => (at += (3 + ((i * 7919) % 18)) / 60));
    expect(different(seconds).heartbeatMs).toBe(20 * SECOND_MS);
  });

  test('a logger of 5 minutes that is up to 40 seconds early or late is believed for 14 minutes, not for hours', () => {
    let at = 0;
    const late = Array.from(
      { length: 280 },
      (_, i) => (at += 5 + (((i * 7919) % 81) - 40) / 60 + (i === 90 ? 360 : 0)),
    );
    const rhythm = different(late);
    expect(rhythm.usualMs).toBe(0);
    expect(heldForMs('temperature', rhythm.heartbeatMs) / MINUTE_MS).toBeCloseTo(14.2, 0);
  });

  const pace = { isRegular: true, holdMs: 5 * MINUTE_MS };
  const column = { quantity: 'status' as const, ownRows: false };
  const manner = (cells: readonly number[], before?: readonly number[], point = column, rows = pace) => {
    const seen = (values: readonly number[]) => seenOf(bufferOf(values.map((value, i) => [i * 300, value])), 0, rows);
    return mannerOf(seen(cells), before && seen(before), rows, point);
  };

  test('in a regular file a full column is regular, one that is filled here and there is held', () => {
    expect(manner([1, 1, 1, 1, 1, 1])).toEqual({ kind: 'regular', holdMs: 5 * MINUTE_MS });
    expect(manner([1, BLANK, BLANK, 0, BLANK, BLANK, BLANK, BLANK, 1, BLANK, 0])).toMatchObject({ kind: 'held' });
    expect(manner([1, BLANK, BLANK, BLANK])).toEqual({ kind: 'held', ageMs: DAY_MS });
  });

  test('a sensor that falls silent is still regular by the day before, and its last reading is not held on', () => {
    expect(manner([1, BLANK, BLANK, BLANK], [1, 1, 1, 1, 1, 1])).toMatchObject({ kind: 'regular' });
  });

  test('a point with rows of its own and no regular ones is held from its first value on', () => {
    const unknown = { isRegular: false, holdMs: 0 };
    expect(manner([1], undefined, { ...column, ownRows: true }, unknown)).toMatchObject({ kind: 'held' });
    expect(manner([1], undefined, column, unknown)).toEqual({ kind: 'regular', holdMs: 0 });
  });
});
