import { describe, expect, test } from 'vitest';
import { localHours } from '@/lib/queries/local-hours';

const HOUR_MS = 3_600_000;
const at = (text: string) => Date.parse(text);
const lengths = (timeZone: string, from: string, to: string) => {
  const hours = localHours(timeZone, at(from), at(to));
  return hours.map((hour, index) => ((hours[index + 1]?.startMs ?? at(to)) - hour.startMs) / 60_000);
};

describe('the clock hours of a plant', () => {
  test('begin at whole UTC hours where the offset is whole, and belong to the local day', () => {
    const hours = localHours('America/Denver', at('2026-06-02T05:00:00Z'), at('2026-06-02T08:00:00Z'));
    expect(hours.map(({ startMs }) => startMs)).toEqual([5, 6, 7].map((hour) => at(`2026-06-02T0${hour}:00:00Z`)));
    expect(hours.map(({ day }) => day)).toEqual(['2026-06-01', '2026-06-02', '2026-06-02']);
  });

  test('begin at the half hour in a half-hour zone, with the one that holds the start', () => {
    const [first, second] = localHours('Asia/Kolkata', at('2026-06-02T00:00:00Z'), at('2026-06-02T02:00:00Z'));
    expect(first?.startMs).toBe(at('2026-06-01T23:30:00Z'));
    expect(second?.startMs).toBe(at('2026-06-02T00:30:00Z'));
  });

  test('repeat one hour in autumn and skip one in spring', () => {
    const day = (from: string, to: string) => localHours('America/Denver', at(from), at(to)).length;
    expect(day('2026-11-01T06:00:00Z', '2026-11-02T07:00:00Z')).toBe(25);
    expect(day('2026-03-08T07:00:00Z', '2026-03-09T06:00:00Z')).toBe(23);
  });

  test('cover every minute once, also across a clock change of half an hour', () => {
    const [from, to] = ['2026-04-04T00:30:00Z', '2026-04-06T00:30:00Z'];
    const minutes = lengths('Australia/Lord_Howe', from, to);
    expect(minutes.every((length) => length > 0 && length <= 90)).toBe(true);
    const hours = localHours('Australia/Lord_Howe', at(from), at(to));
    expect((hours[0]?.startMs ?? 0) <= at(from)).toBe(true);
    expect(minutes.reduce((sum, length) => sum + length, 0)).toBe((at(to) - (hours[0]?.startMs ?? 0)) / 60_000);
    expect(at(to) - at(from)).toBe(48 * HOUR_MS);
  });
});
