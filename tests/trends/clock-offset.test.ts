import { describe, expect, test } from 'vitest';
import { clockDoubts } from '@/lib/trends/clock-doubts';
import { findClockOffset } from '@/lib/trends/clock-offset';
import type { Timed } from '@/lib/trends/clock-steps';
import { suggestRoles } from '@/lib/trends/roles/suggest';
import { columnStatistics } from '@/lib/trends/roles/statistics';
import { dice, PLANT } from './roles-support';

const START_MS = Date.UTC(2026, 5, 1);
const MINUTE_MS = 60_000;

/** A record of `days` days, a value each `stepMinutes`, with the clock `aheadMinutes` ahead. */
function record(days: number, stepMinutes: number, value: (minute: number) => number, aheadMinutes = 0): Timed {
  const count = Math.floor((days * 1440) / stepMinutes);
  const timesMs = Float64Array.from(
    { length: count },
    (_, i) => START_MS + (i * stepMinutes + aheadMinutes) * MINUTE_MS,
  );
  return { timesMs, values: Float64Array.from({ length: count }, (_, i) => value(i * stepMinutes)) };
}

/** A machine that is switched on and off at times of its own, some `perDay` changes a day: its state by minute. */
function switching(seed: number, days: number, perDay: number): (minute: number) => number {
  const next = dice(seed);
  const changes: number[] = [];
  for (let minute = 0; minute < days * 1440; minute += 30 - Math.log(1 - next()) * (1440 / perDay - 30))
    changes.push(minute);
  return (minute) => {
    let low = 0;
    let high = changes.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (changes[middle]! <= minute) low = middle + 1;
      else high = middle;
    }
    return low % 2;
  };
}

/** Values of a smooth walk that goes back to its mean, by five minutes. */
function walk(seed: number, days: number): (minute: number) => number {
  const next = dice(seed);
  let at = 0;
  const values = Array.from({ length: days * 288 + 1 }, () => (at = 0.97 * at + next() - 0.5));
  return (minute) => values[Math.floor(minute / 5)]!;
}
const noise = (seed: number, size: number) => {
  const next = dice(seed);
  return () => size * (next() - 0.5);
};
const daily = (minute: number, phase = 0) => Math.sin(((minute - phase) / 1440) * 2 * Math.PI);

describe('a source whose clock is off', () => {
  test.each([-1440, -180, -75, -60, -30, -15, 15, 30, 45, 60, 120, 180, 720, 1440])(
    'by %i minutes is found from a state and the power that follows it',
    (ahead) => {
      const state = switching(11, 14, 6);
      const jitter = noise(5, 12);
      const power = record(14, 5, (minute) => state(minute) * (180 + 20 * daily(minute)) + jitter(), ahead);
      const found = findClockOffset(power, record(14, 5, state));
      expect(found?.offsetMinutes).toBe(ahead);
      expect(found!.correlation).toBeGreaterThan(0.8);
      expect(found!.atZero).toBeLessThan(0.3);
    },
  );

  test('is found when one source is logged each minute and the other each quarter of an hour', () => {
    const state = switching(23, 14, 6);
    const found = findClockOffset(
      record(14, 15, (minute) => 700 * state(minute)),
      record(14, 1, state, 60),
    );
    expect(found?.offsetMinutes).toBe(-60);
  });

  test('is found from changes of value, written only when they happen, and in any order', () => {
    const state = switching(31, 20, 8);
    const all = record(20, 5, state, -60);
    const changes = Array.from(all.values, (_, i) => i).filter(
      (i) => i === 0 || i % 12 === 0 || all.values[i] !== all.values[i - 1],
    );
    changes.reverse();
    const log = {
      timesMs: Float64Array.from(changes, (i) => all.timesMs[i]!),
      values: Float64Array.from(changes, (i) => all.values[i]!),
    };
    expect(findClockOffset(log, record(20, 5, state))?.offsetMinutes).toBe(-60);
  });

  test('and one that falls when the other rises tells it as well', () => {
    const state = switching(41, 14, 6);
    const found = findClockOffset(
      record(14, 5, (minute) => 60 - 15 * state(minute), 60),
      record(14, 5, state),
    );
    expect(found?.offsetMinutes).toBe(60);
  });
});

describe('no alarm', () => {
  test('for 200 pairs that have nothing to do with each other', () => {
    const kinds: ((seed: number) => (minute: number) => number)[] = [
      (seed) => walk(seed, 10),
      (seed) => switching(seed, 10, 5),
      (seed) => switching(seed, 10, 20),
      (seed) => {
        const jitter = noise(seed, 0.3);
        return (minute) => daily(minute, (seed * 37) % 720) + jitter();
      },
      (seed) => {
        const jitter = noise(seed, 0.02);
        return (minute) => (minute % 1440 > 360 + (seed % 90) && minute % 1440 < 1080 ? 1 : 0) + jitter();
      },
    ];
    const alarms: string[] = [];
    for (let i = 0; i < 200; i++) {
      const [a, b] = [kinds[i % 5]!(1000 + i), kinds[Math.floor(i / 5) % 5]!(5000 + i)];
      const found = findClockOffset(record(10, 5, a), record(10, 5, b));
      if (found && found.offsetMinutes !== 0) alarms.push(`pair ${i}: ${JSON.stringify(found)}`);
    }
    expect(alarms).toEqual([]);
  });

  test('for 200 pairs that move together and whose clocks agree, and most of them are seen to', () => {
    let agree = 0;
    for (let i = 0; i < 200; i++) {
      const state = switching(300 + i, 10, 4 + (i % 9));
      const jitter = noise(i, 0.1);
      const found = findClockOffset(
        record(10, 5, (minute) => state(minute) + jitter()),
        record(10, 5, (minute) => 200 * state(minute - (i % 2) * 5)),
      );
      if (found) expect(found.offsetMinutes, `pair ${i}`).toBe(0);
      if (found?.offsetMinutes === 0) agree++;
    }
    expect(agree).toBeGreaterThan(150);
  });

  test('for a daily curve and the same curve hours later', () => {
    const a = record(21, 5, (minute) => daily(minute));
    expect(
      findClockOffset(
        a,
        record(21, 5, (minute) => daily(minute, 240)),
      ),
    ).toBeNull();
  });

  test('for two schedules an hour apart, every day or on workdays', () => {
    const schedule = (from: number, workdays: boolean) => (minute: number) => {
      const day = Math.floor(minute / 1440);
      if (workdays && day % 7 > 4) return 0;
      return minute % 1440 >= from && minute % 1440 < from + 600 ? 1 : 0;
    };
    for (const workdays of [false, true]) {
      const found = findClockOffset(record(28, 5, schedule(360, workdays)), record(28, 5, schedule(420, workdays)));
      expect(found).toBeNull();
    }
  });

  test('for three days of schedules with several steps a day, an hour apart', () => {
    const schedule = (from: number) => (minute: number) =>
      [0, 200, 490].some((start) => (minute % 1440) - from >= start && (minute % 1440) - from < start + 130) ? 1 : 0;
    expect(findClockOffset(record(3, 5, schedule(360)), record(3, 5, schedule(420)))).toBeNull();
  });

  test('for machines that cycle by the hour, as any number of hours would fit', () => {
    const cycling = (shift: number) => (minute: number) => ((minute + shift) % 60 < 30 ? 1 : 0);
    expect(findClockOffset(record(1.9, 5, cycling(0)), record(1.9, 5, cycling(15)))).toBeNull();
  });

  test('for records without values, or of which one is constant', () => {
    const state = record(10, 5, switching(3, 10, 6));
    expect(
      findClockOffset(
        record(0, 5, () => 1),
        state,
      ),
    ).toBeNull();
    expect(
      findClockOffset(
        record(10, 5, () => Number.NaN),
        state,
      ),
    ).toBeNull();
    expect(
      findClockOffset(
        record(10, 5, () => 44),
        state,
      ),
    ).toBeNull();
  });
});

test('times and values of different length are refused', () => {
  const state = record(10, 5, switching(3, 10, 6));
  expect(() => findClockOffset({ ...state, values: state.values.slice(1) }, state)).toThrow(
    'stepsOf: 2880 times for 2879 values',
  );
});

describe('the tables of a drop', () => {
  const state = switching(77, 14, 7);
  const second = switching(78, 14, 7);
  const candidate = (table: number, column: string, { timesMs, values }: Timed) => ({
    column,
    unitCell: '',
    table,
    timesMs,
    statistics: columnStatistics(Array.from(values, String), '.'),
  });
  const drop = (ahead: number) => [
    candidate(0, 'CH1 Status', record(14, 5, state)),
    candidate(0, 'CH2 Status', record(14, 5, second)),
    candidate(
      0,
      'Pri CHW Supply Temp (°F)',
      record(14, 5, (minute) => 44 + 0.2 * daily(minute)),
    ),
    candidate(
      1,
      'CH1 kW',
      record(14, 5, (minute) => 190 * state(minute), ahead),
    ),
    candidate(
      1,
      'CH2 kW',
      record(14, 5, (minute) => 190 * second(minute), ahead),
    ),
  ];

  test('the one whose clock is an hour ahead is named, with what to do', () => {
    const doubts = clockDoubts(suggestRoles(drop(60), PLANT));
    expect(doubts).toHaveLength(1);
    expect(doubts[0]).toMatchObject({ table: 1, againstTable: 0, offsetMinutes: 60 });
    expect(doubts[0]!.message).toMatch(
      /^"CH\d kW" changes 1 h after "CH\d Status" \(\d+ % of steps match so, \d+ % as/,
    );
    expect(doubts[0]!.message).toMatch(/shift the times of "CH\d kW" and what came with it by -1 h\.$/);
  });

  test('nothing is said where the clocks agree, or where the columns have no times of their own', () => {
    expect(clockDoubts(suggestRoles(drop(0), PLANT))).toEqual([]);
    const untimed = drop(60).map((each) => ({ ...each, timesMs: undefined }));
    expect(clockDoubts(suggestRoles(untimed, PLANT))).toEqual([]);
  });
});
