import { describe, expect, test } from 'vitest';
import { ProblemError } from '@/lib/http/problem';
import { apiInstant, blockDays, resolvePeriod } from '@/lib/queries/period';

const denver = { timeZone: 'America/Denver', dataThrough: new Date('2026-03-09T05:55:00Z') };
const shown = (asked: { from?: string; to?: string }, plant = denver, now?: number) => {
  const { fromMs, toMs } = resolvePeriod(asked, plant, now);
  return [apiInstant(fromMs), apiInstant(toMs)];
};

describe('the period of a request', () => {
  test('without bounds is the last 14 local days of data, across a change of clocks', () => {
    // The last data are of Sunday 8 March, local: the day of 23 hours.
    expect(shown({})).toEqual(['2026-02-23T07:00:00Z', '2026-03-09T06:00:00Z']);
  });

  test('without data ends with the present local day', () => {
    const now = Date.parse('2026-07-10T03:00:00Z');
    const empty = { timeZone: 'America/Denver', dataThrough: null };
    const { fromMs, toMs } = resolvePeriod({}, empty, now);
    expect([apiInstant(fromMs), apiInstant(toMs)]).toEqual(['2026-06-26T06:00:00Z', '2026-07-10T06:00:00Z']);
  });

  test('a local day of a spring change holds 23 hours, of an autumn change 25', () => {
    expect(shown({ from: '2026-03-08', to: '2026-03-09' })).toEqual(['2026-03-08T07:00:00Z', '2026-03-09T06:00:00Z']);
    expect(shown({ from: '2026-11-01', to: '2026-11-02' })).toEqual(['2026-11-01T06:00:00Z', '2026-11-02T07:00:00Z']);
  });

  test('takes instants with any offset beside local days', () => {
    expect(shown({ from: '2026-03-01T12:00:00+05:30', to: '2026-03-02' })).toEqual([
      '2026-03-01T06:30:00Z',
      '2026-03-02T07:00:00Z',
    ]);
  });

  test('an absent `from` lies 14 local days before `to`', () => {
    expect(shown({ to: '2026-03-15' })).toEqual(['2026-03-01T07:00:00Z', '2026-03-15T06:00:00Z']);
  });

  test('is refused with the path of the bound when it ends before it begins, and when it is endless', () => {
    const refused = (asked: { from: string; to: string }) => {
      try {
        resolvePeriod(asked, denver);
      } catch (error) {
        return error instanceof ProblemError ? [error.status, error.errors?.[0]?.path] : error;
      }
      return 'accepted';
    };
    expect(refused({ from: '2026-03-02', to: '2026-03-02' })).toEqual([400, 'from']);
    expect(refused({ from: '1990-01-01', to: '2026-03-02' })).toEqual([400, 'to']);
  });

  test('reads the UTC days that hold it and no day more', () => {
    expect(blockDays({ fromMs: Date.parse('2026-03-01T00:00Z'), toMs: Date.parse('2026-03-03T00:00Z') })).toEqual({
      fromDay: '2026-03-01',
      toDay: '2026-03-02',
    });
  });
});
