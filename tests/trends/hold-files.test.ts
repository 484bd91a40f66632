import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { createTrendReader, type DayOfColumn } from '@/lib/trends';
import { bytesOf, planFor, readText, samplesOf } from './support';

const PLAN = planFor({
  stepMinutes: 30,
  columns: [
    { column: 'a', role: 'primarySupplyTemp', unit: 'degF' },
    { column: 'b', role: 'unitStatus', unit: 'on/off', unitIndex: 1 },
  ],
});

describe('a file that is logged on change', () => {
  const text = [
    'time,a,b',
    '2026-07-20 00:00,44,Off',
    '2026-07-20 00:41,45,',
    '2026-07-20 01:15,,On',
    '2026-07-20 01:50,Log Disabled,',
    '2026-07-20 02:37,46,',
    '2026-07-20 03:30,Bad,',
    '2026-07-20 04:02,,Off',
    '2026-07-20 04:59,47,On',
    '2026-07-20 05:29,48,Off',
    '',
  ].join('\n');

  test('is held by column, weighted by time; a disabled log and a bad value end what was held', () => {
    const read = readText(text, PLAN);
    const at = (column: number) => samplesOf(read, column).map(([time, value]) => [time.slice(11), value]);
    expect(at(0)).toEqual([
      ['00:00', 44],
      ['00:30', expect.closeTo((44 * 11 + 45 * 19) / 30, 4)],
      ['01:00', 45],
      ['01:30', 45],
      ['02:30', 46],
      ['03:00', 46],
      ['05:00', expect.closeTo((47 * 29 + 48) / 30, 4)],
    ]);
    expect(at(1)).toEqual([
      ['00:00', 0],
      ['00:30', 0],
      ['01:00', 0.5],
      ...['01:30', '02:00', '02:30', '03:00', '03:30'].map((time) => [time, 1]),
      ['04:00', expect.closeTo(2 / 30, 6)],
      ['04:30', expect.closeTo(1 / 30, 6)],
      ['05:00', expect.closeTo(29 / 30, 6)],
    ]);
    expect(read.report.problems.map(({ code, column }) => [code, column])).toEqual(
      expect.arrayContaining([
        ['log-ended', 'a'],
        ['missing-word', 'a'],
      ]),
    );
  });

  test('reads the same however its bytes are cut and whenever its days are taken', () => {
    const change = fc.tuple(
      fc.integer({ min: 1, max: 700 }),
      fc.constantFrom('44', '45.5', '', 'Bad'),
      fc.constantFrom('On', 'Off', ''),
    );
    const cuts = fc.array(fc.integer({ min: 1, max: 200 }), { maxLength: 30 });
    fc.assert(
      fc.property(
        fc.array(change, { minLength: 5, maxLength: 120 }),
        cuts,
        fc.boolean(),
        (changes, pieces, newestFirst) => {
          let minute = 0;
          const lines = changes.map(([after, a, b]) => {
            const time = new Date(Date.UTC(2026, 6, 20, 0, (minute += after))).toISOString().slice(0, 16);
            return `${time},${a},${b}\n`;
          });
          const bytes = bytesOf(`time,a,b\n${(newestFirst ? lines.reverse() : lines).join('')}`);
          const whole = readText(bytes, PLAN);
          const reader = createTrendReader(PLAN, { blockCharacters: 50 });
          const days: DayOfColumn[] = [];
          let from = 0;
          for (const piece of [...pieces, bytes.length]) {
            reader.push(bytes.subarray(from, from + piece));
            days.push(...reader.takeOldestDays(2));
            from += piece;
          }
          days.push(...reader.finish());
          const cut = { days, report: reader.report() };
          for (const column of [0, 1]) expect(samplesOf(cut, column)).toEqual(samplesOf(whole, column));
          expect(cut.report).toEqual(whole.report);
        },
      ),
      { numRuns: 150 },
    );
  }, 60_000);
});
