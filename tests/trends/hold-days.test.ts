import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { DayStore, type StoredColumn } from '@/lib/trends/day-store';
import { StampWriter } from '@/lib/trends/gaps';
import { ProblemLog } from '@/lib/trends/problems';
import { StepCounter } from '@/lib/trends/step';
import { HOUR_MS, MINUTE_MS } from '@/lib/trends/timestamps';
import type { DayOfColumn } from '@/lib/trends/types';
import { BLANK } from '@/lib/trends/values';
import { LocalClock } from '@/lib/trends/zone-offsets';

const START_MS = Date.UTC(2026, 6, 20);
const STATUS: StoredColumn = { plan: 0, unit: 'on/off', name: 'CH-1 Status', ownRows: true };

type Row = readonly [utcMs: number, ...values: number[]];

function store(columns: readonly StoredColumn[], stepMinutes: number) {
  const step = new StepCounter();
  const problems = new ProblemLog();
  const stamps = new StampWriter(new LocalClock('UTC'), { columns: ['time'], form: 'iso' });
  const days = new DayStore(columns, stepMinutes, step, problems, stamps);
  let previousMs = Number.NaN;
  const add = ([utcMs, ...values]: Row, row: number) => {
    if (utcMs !== previousMs && !Number.isNaN(previousMs)) step.add(utcMs - previousMs);
    previousMs = utcMs;
    const into = days.addRow(utcMs, row);
    values.forEach((value, c) => (into[days.base + c] = value));
  };
  return { days, add, problems };
}

function read(rows: readonly Row[], columns: readonly StoredColumn[], stepMinutes: number, untilMs?: number) {
  const { days, add, problems } = store(columns, stepMinutes);
  rows.forEach((row, i) => add(row, i + 2));
  return { taken: days.takeAll(untilMs), problems: problems.list() };
}

const inOrder = (days: readonly DayOfColumn[]): DayOfColumn[] =>
  [...days].sort((a, b) => a.day.localeCompare(b.day) || a.column - b.column);
const at = (hour: number): number => START_MS + hour * HOUR_MS;

describe('DayStore, columns logged on change', () => {
  test('the last value of a day reaches into the next, up to its age, although no row stands there', () => {
    const rows: Row[] = [
      [at(6), 0],
      [at(18), 1],
      [at(90), 0],
    ];
    const { taken, problems } = read(rows, [STATUS], 60);
    expect(inOrder(taken).map(({ day }) => day)).toEqual(['2026-07-20', '2026-07-21', '2026-07-23']);
    const [first, second, last] = inOrder(taken).map(({ values }) => [...values]);
    expect(first!.slice(5, 7)).toEqual([NaN, 0]);
    expect(first!.slice(17, 24)).toEqual([0, 1, 1, 1, 1, 1, 1]);
    expect(second!.slice(0, 18)).toEqual(Array.from({ length: 18 }, () => 1));
    expect(second!.slice(18)).toEqual(Array.from({ length: 6 }, () => NaN));
    expect(last!.filter((value) => !Number.isNaN(value))).toHaveLength(1);
    expect(problems).toEqual([
      {
        code: 'held-too-long',
        severity: 'warning',
        row: 3,
        column: 'CH-1 Status',
        count: 1,
        message:
          'No new value came within 1 day after 2026-07-20 18:00. Left empty from then to the next value; let the logger also write once an hour when nothing changes.',
      },
    ]);
  });

  test('a point’s last value is held to the end of the file’s record where other points go on', () => {
    const rows: Row[] = [[at(6), 1]];
    expect(read(rows, [STATUS], 60).taken[0]!.values.filter((value) => value === 1)).toHaveLength(1);
    const { taken } = read(rows, [STATUS], 60, at(26.5));
    expect(inOrder(taken).map(({ day, values }) => [day, values.filter((value) => value === 1).length])).toEqual([
      ['2026-07-20', 18],
      ['2026-07-21', 3],
    ]);
  });

  test('two columns of one file, each blank where it did not change, are both held', () => {
    const rows: Row[] = [
      [at(0), 1, 440],
      [at(1.13), BLANK, 450],
      [at(2.5), 0, BLANK],
      [at(2.9), BLANK, 400],
      [at(4.2), 1, BLANK],
      [at(7), BLANK, 420],
      [at(7.3), 0, BLANK],
      [at(9.1), 1, BLANK],
    ];
    const { taken } = read(rows, [STATUS, { plan: 1, unit: 'gpm' }], 60);
    expect([...taken[0]!.values.slice(0, 4)]).toEqual([1, 1, 0.5, 0]);
    expect(taken[1]!.values[1]).toBeCloseTo(440 * 0.13 + 450 * 0.87, 3);
    expect([...taken[1]!.values.slice(3, 9)]).toEqual([400, 400, 400, 400, 420, 420]);
  });

  test('a gap’s sentence says that held values went on through it', () => {
    const changes = new Map([
      [0, 1],
      [3, 0],
      [11, 1],
      [13, 0],
      [29, 1],
      [50, 0],
    ]);
    const rows = Array.from({ length: 60 }, (_, i): Row => [
      at(i < 30 ? i / 12 : i / 12 + 5),
      changes.get(i) ?? BLANK,
      i,
    ]);
    const columns: StoredColumn[] = [STATUS, { plan: 1, unit: 'gpm' }];
    const { problems, taken } = read(rows, columns, 5);
    expect(problems.find(({ code }) => code === 'gap')?.message).toBe(
      '2026-07-20 02:25 is followed by 07:30. A gap of 5 hours; only values logged on change were kept on.',
    );
    expect([...taken[0]!.values.slice(28, 92)].every((value, i) => value === (i === 0 ? 0 : 1))).toBe(true);
    expect([...taken[1]!.values.slice(28, 92)].filter((value) => !Number.isNaN(value))).toEqual([28, 29, 30, 31]);
  });

  test('a day that comes again after it was handed out is not filled a second time', () => {
    const rows = Array.from({ length: 30 }, (_, i): Row => [at(i * 5 + ((i * i * 37) % 13) / 4), i % 2]);
    const { days, add } = store([STATUS], 60);
    rows.forEach((row, i) => add(row, i + 2));
    days.takeOldest(1);
    add([at(3.5), 1], 99);
    const again = days.takeAll().find(({ day }) => day === '2026-07-20');
    expect([...again!.values].flatMap((value, slot) => (Number.isNaN(value) ? [] : [[slot, value]]))).toEqual([[3, 1]]);
  });

  const change = fc.tuple(fc.integer({ min: 1, max: 30 * 60 }), fc.constantFrom(0, 1, 1, 0, Number.NaN));
  const logs = fc.array(change, { minLength: 1, maxLength: 60 }).map((changes) => {
    let minute = 0;
    return changes.map(([after, value]): Row => [START_MS + (minute += after) * MINUTE_MS, value]);
  });

  test('any order of the rows gives the same days', () => {
    const both = logs.chain((rows) =>
      fc.tuple(fc.constant(rows), fc.shuffledSubarray(rows, { minLength: rows.length })),
    );
    fc.assert(
      fc.property(both, ([rows, shuffled]) => {
        // Without distances between rows: only the column's own record decides, whatever the order.
        const readAll = (some: readonly Row[]) => {
          const { days } = store([STATUS], 15);
          for (const [utcMs, value] of some) days.addRow(utcMs, 2)[days.base] = value!;
          return inOrder(days.takeAll());
        };
        expect(readAll(shuffled)).toEqual(readAll(rows));
      }),
      { numRuns: 200 },
    );
  });

  test('taking days after any row changes no value, oldest first and newest first', () => {
    fc.assert(
      fc.property(
        logs,
        fc.boolean(),
        fc.array(fc.integer({ min: 0, max: 3 }), { minLength: 1, maxLength: 12 }),
        (rows, newestFirst, keeps) => {
          const ordered = newestFirst ? [...rows].reverse() : rows;
          const { days, add, problems } = store([STATUS], 15);
          const taken: DayOfColumn[] = [];
          ordered.forEach((row, i) => {
            add(row, i + 2);
            taken.push(...days.takeOldest(keeps[i % keeps.length]!));
          });
          taken.push(...days.takeAll());
          const whole = read(ordered, [STATUS], 15);
          expect(inOrder(taken)).toEqual(inOrder(whole.taken));
          expect(problems.list()).toEqual(whole.problems);
          expect(new Set(taken.map(({ day }) => day)).size).toBe(taken.length);
        },
      ),
      { numRuns: 300 },
    );
  });
});
