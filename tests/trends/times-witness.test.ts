import { describe, expect, test } from 'vitest';
import { TrendError, type TimestampForm, type TimestampPlan } from '@/lib/trends';
import { shiftOf } from '@/lib/trends/time-stamps';
import { DayMonthWitness } from '@/lib/trends/time-witness';
import { StampParser } from '@/lib/trends/timestamps';

/** A witness that saw the whole column, and the row at which it would have stopped the reading. */
function watch(form: TimestampForm, texts: readonly string[], year: number | null = null) {
  const parser = new StampParser(form, '.', year);
  const witness = new DayMonthWitness(form);
  let stoppedAt: number | null = null;
  texts.forEach((text, i) => {
    if (parser.parse(text)) witness.accept(parser);
    else witness.refuse(text, i + 2);
    if (witness.isMisread) stoppedAt ??= i + 2;
  });
  return { witness, stoppedAt };
}

const two = (value: number) => String(value).padStart(2, '0');
/** A row an hour, from the first of February 2026, day first. */
const february = (days: number) =>
  Array.from({ length: days * 24 }, (_, i) => `${two(Math.floor(i / 24) + 1)}/02/2026 ${two(i % 24)}:00`);

describe('DayMonthWitness', () => {
  test('stops ten rows after the first date that only the other form can read, when none spoke for this one', () => {
    const { witness, stoppedAt } = watch('month/day/year', february(28));
    // 12 days of 24 rows were read wrongly; row 290 is 13 February.
    expect(stoppedAt).toBe(299);
    expect(witness.firstRow).toBe(290);
    expect(witness.error()).toBeInstanceOf(TrendError);
    expect(witness.error()).toMatchObject({
      code: 'unsupported',
      row: 290,
      message:
        'Row 290 holds "13/02/2026 00:00", which can only be day first, but the file was to be read as month first. Choose day/month/year for the time and read the file again.',
    });
  });

  test('stops at the end for a single such row: the whole file may be of other days', () => {
    const { witness, stoppedAt } = watch('month/day/year', february(13).slice(0, 289));
    expect(stoppedAt).toBeNull();
    expect([witness.ambiguousRows, witness.confirmingRows, witness.contradictingRows]).toEqual([264, 0, 1]);
    expect(witness.isMisreadAtEnd).toBe(true);
  });

  test('is content with the right form', () => {
    const { witness, stoppedAt } = watch('day/month/year', february(28));
    expect(stoppedAt).toBeNull();
    expect([witness.ambiguousRows, witness.confirmingRows, witness.contradictingRows]).toEqual([264, 384, 0]);
    expect([witness.isMisreadAtEnd, witness.warning()]).toEqual([false, null]);
  });

  test('rows that only the other form can read do not stop a file in which more can only be read this way, but are told', () => {
    const { witness, stoppedAt } = watch('day/month/year', [
      ...february(28),
      ...Array<string>(20).fill('02/28/2026 01:00'),
    ]);
    expect(stoppedAt).toBeNull();
    expect(witness.isMisreadAtEnd).toBe(false);
    expect(witness.warning()).toBe(
      'Rows like "02/28/2026 01:00" can only be month first, others only day first. Those that could be either were read as day first; check their days.',
    );
  });

  test('a file whose dates are all open is told when the other form puts them side by side', () => {
    const { witness } = watch('month/day/year', february(10));
    expect([witness.isMisread, witness.isMisreadAtEnd]).toEqual([false, false]);
    expect(witness.warning()).toBe(
      'Every date could have month and day either way round. Read as month first they lie far apart; as day first they would follow each other. Check the form of the time.',
    );
    expect(watch('day/month/year', february(10)).witness.warning()).toBeNull();
  });

  test('works on forms without a year, and on dates given once a day', () => {
    const yearless = february(20).map((text) => text.replace('/2026', ''));
    expect(watch('month/day', yearless, 2026).stoppedAt).toBe(299);
    const once = february(20).map((text, i) => (i % 24 === 0 ? text : text.slice(11)));
    expect(watch('month/day/year', once).stoppedAt).toBe(299);
  });

  test('months in letters, other forms and torn rows say nothing', () => {
    expect(watch('day/month/year', ['01-Feb-2026 00:00', '13-Feb-2026 00:00']).witness.confirmingRows).toBe(0);
    const { witness } = watch('month/day/year', ['01/05/2026 00:00', 'total', '', '99/99/2026', '2026-13-01 00:00']);
    expect([witness.contradictingRows, witness.isMisreadAtEnd]).toEqual([0, false]);
    expect(watch('iso', ['2026-01-02 00:00', '13/01/2026']).witness.contradictingRows).toBe(0);
  });
});

describe('shiftOf', () => {
  const plan = (change: Partial<TimestampPlan>): TimestampPlan => ({ columns: ['t'], form: 'iso', ...change });
  test.each([
    [plan({}), 0],
    [plan({ stamps: 'start' }), 0],
    [plan({ stamps: 'end' }), -900_000],
    [plan({ shiftMinutes: -60 }), -3_600_000],
    [plan({ stamps: 'end', shiftMinutes: 60 }), 2_700_000],
  ])('%j moves each row of a 15-minute log by %d ms', (given, ms) => {
    expect(shiftOf(given, 900_000)).toBe(ms);
  });

  test('without a usual step the ends of intervals stay where they are', () => {
    expect(Math.abs(shiftOf(plan({ stamps: 'end' }), 0))).toBe(0);
  });
});
