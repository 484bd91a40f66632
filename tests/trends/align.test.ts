import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { DayAligner } from '@/lib/trends/align';
import { DayBuffer, tailOf } from '@/lib/trends/day-buffer';
import { mannerOf, seenOf } from '@/lib/trends/hold-manner';
import { DAY_MS } from '@/lib/trends/timestamps';
import { BLANK } from '@/lib/trends/values';

const MINUTE_MS = 60_000;

function bufferOf(rows: readonly (readonly [minute: number, ...values: number[]])[]): DayBuffer {
  const buffer = new DayBuffer(rows[0]!.length - 1);
  rows.forEach(([minute, ...values], i) => {
    const base = buffer.addRow(minute * MINUTE_MS, i + 2);
    values.forEach((value, c) => (buffer.values[base + c] = value));
  });
  buffer.settle(() => undefined);
  return buffer;
}

function align(
  rows: readonly (readonly [number, ...number[]])[],
  stepMinutes: number,
  usualMinutes: number,
  before?: DayBuffer,
): number[] {
  const aligner = new DayAligner(stepMinutes * MINUTE_MS);
  const out = new Float64Array(aligner.slots);
  const pace = { isRegular: true, holdMs: usualMinutes * MINUTE_MS };
  const day = bufferOf(rows);
  const manner = mannerOf(seenOf(day, 0, pace), undefined, pace, { quantity: 'temperature', ownRows: false });
  aligner.align(day, 0, manner, before && tailOf(before), DAY_MS, out);
  return [...out];
}

describe('DayAligner', () => {
  test('a slot holds the mean of the readings in [t, t + step)', () => {
    expect(
      align(
        [
          [0, 1],
          [1, 2],
          [4.999, 6],
          [5, 10],
        ],
        5,
        1,
      ).slice(0, 3),
    ).toEqual([3, 10, NaN]);
  });

  test('a status averages to the share of the slot it was on', () => {
    expect(
      align(
        [
          [0, 1],
          [1, 1],
          [2, 0],
          [3, 0],
          [4, 0],
        ],
        5,
        1,
      )[0],
    ).toBeCloseTo(0.4, 12);
  });

  test('missing readings do not count in the mean, and a slot of nothing else is missing', () => {
    expect(
      align(
        [
          [0, 4],
          [1, NaN],
          [2, 6],
          [5, NaN],
        ],
        5,
        1,
      ).slice(0, 2),
    ).toEqual([5, NaN]);
  });

  test('a 15-minute reading fills three slots of 5 minutes and never a fourth', () => {
    expect(
      align(
        [
          [0, 1],
          [15, 2],
          [45, 4],
        ],
        5,
        15,
      ).slice(0, 13),
    ).toEqual([1, 1, 1, 2, 2, 2, NaN, NaN, NaN, 4, 4, 4, NaN]);
  });

  test('a missing reading is missing for its 15 minutes; the one before does not reach over it', () => {
    expect(
      align(
        [
          [0, 1],
          [15, NaN],
          [30, 3],
        ],
        5,
        15,
      ).slice(0, 9),
    ).toEqual([1, 1, 1, NaN, NaN, NaN, 3, 3, 3]);
  });

  test('a 1-minute reading is not stretched over a 5-minute slot it is not in', () => {
    expect(align([[4, 1]], 5, 1).slice(0, 2)).toEqual([1, NaN]);
  });

  test('a logger that is early by a second leaves no hole', () => {
    expect(
      align(
        [
          [0, 1],
          [4.98, 2],
          [10, 3],
        ],
        5,
        5,
      ).slice(0, 3),
    ).toEqual([1.5, 2, 3]);
  });

  test('the last reading of the day before reaches in as far as its own usual distance', () => {
    const before = bufferOf([
      [1425, 7],
      [1434, 8],
    ]);
    expect(align([[10, 1]], 5, 15, before).slice(0, 3)).toEqual([8, 8, 1]);
  });

  test('a column that is blank in every other row holds for its own distance, not the file’s', () => {
    const rows = Array.from({ length: 12 }, (_, i): [number, number] => [i * 5, i % 3 === 0 ? i : BLANK]);
    expect(align(rows, 5, 5).slice(0, 7)).toEqual([0, 0, 0, 3, 3, 3, 6]);
  });

  test('each mean lies within its readings and every reading is in exactly one mean, for any times and steps', () => {
    const rows = fc.uniqueArray(
      fc.tuple(fc.integer({ min: 0, max: 1439 }), fc.double({ min: -50, max: 50, noNaN: true })),
      {
        selector: ([minute]) => minute,
        minLength: 1,
        maxLength: 60,
      },
    );
    fc.assert(
      fc.property(rows, fc.constantFrom(1, 2, 5, 10, 15, 30, 60), (unsorted, step) => {
        const out = align(unsorted, step, 0);
        const weights = new Map<number, number[]>();
        for (const [minute, value] of unsorted) {
          const slot = Math.floor(minute / step);
          weights.set(slot, [...(weights.get(slot) ?? []), value]);
        }
        const wrong = out.flatMap((value, slot) => {
          const readings = weights.get(slot);
          if (!readings) return Number.isNaN(value) ? [] : [slot];
          const sum = readings.reduce((total, each) => total + each, 0);
          const within = value >= Math.min(...readings) - 1e-9 && value <= Math.max(...readings) + 1e-9;
          return within && Math.abs(value * readings.length - sum) < 1e-6 ? [] : [slot];
        });
        expect(wrong).toEqual([]);
      }),
    );
  });
});

describe('DayBuffer', () => {
  test('rows are put in order and of two at one time the later cell is kept unless it is blank', () => {
    const buffer = new DayBuffer(2);
    const rows: [number, number, number][] = [
      [10, 1, 5],
      [5, 2, 6],
      [10, 3, BLANK],
      [5, 2, 6],
    ];
    rows.forEach(([minute, a, b], i) => {
      const base = buffer.addRow(minute, i + 2);
      buffer.values.set([a, b], base);
    });
    const twice: [number, number, boolean][] = [];
    buffer.settle((timeMs, row, differs) => twice.push([timeMs, row, differs]));
    expect(buffer.count).toBe(2);
    expect([...buffer.values.subarray(0, 4)]).toEqual([2, 6, 3, 5]);
    expect(twice).toEqual([
      [5, 5, false],
      [10, 4, true],
    ]);
  });

  test('grows past its first rows without losing any', () => {
    const buffer = new DayBuffer(1);
    for (let i = 0; i < 1000; i++) {
      const base = buffer.addRow(i, i);
      buffer.values[base] = i;
    }
    expect([...buffer.values.subarray(0, 1000)]).toEqual(Array.from({ length: 1000 }, (_, i) => i));
  });
});
