import { describe, expect, test } from 'vitest';
import { HOUR_MS, localDayOf, localDaysOf, localDayStart, localInstant } from '@/lib/queries/local-time';

const iso = (epochMs: number) => new Date(epochMs).toISOString();

describe('local days', () => {
  test.each([
    ['America/Denver', '2026-03-08', '2026-03-08T07:00:00.000Z', 23],
    ['America/Denver', '2026-11-01', '2026-11-01T06:00:00.000Z', 25],
    ['America/Denver', '2026-07-01', '2026-07-01T06:00:00.000Z', 24],
    ['Asia/Kolkata', '2026-07-01', '2026-06-30T18:30:00.000Z', 24],
    ['UTC', '2026-07-01', '2026-07-01T00:00:00.000Z', 24],
    ['Australia/Lord_Howe', '2026-04-05', '2026-04-04T13:00:00.000Z', 24.5],
  ])('in %s %s begins at %s and lasts %d hours', (zone, day, start, hours) => {
    const next = new Date(Date.parse(`${day}T00:00:00Z`) + 86_400_000).toISOString().slice(0, 10);
    expect(iso(localDayStart(day, zone))).toBe(start);
    expect((localDayStart(next, zone) - localDayStart(day, zone)) / HOUR_MS).toBe(hours);
  });

  test('a day whose midnight the clocks skip begins at the change', () => {
    // Beirut moves from 00:00 to 01:00 on the last Sunday of March.
    expect(iso(localDayStart('2026-03-29', 'Asia/Beirut'))).toBe('2026-03-28T22:00:00.000Z');
    expect(localDayOf(localDayStart('2026-03-29', 'Asia/Beirut'), 'Asia/Beirut')).toBe('2026-03-29');
    expect(localDayOf(localDayStart('2026-03-29', 'Asia/Beirut') - 1, 'Asia/Beirut')).toBe('2026-03-28');
  });

  test('a repeated clock hour means its first run, a skipped one the instant of the change', () => {
    expect(iso(localInstant('2026-11-01', 90, 'America/Denver'))).toBe('2026-11-01T07:30:00.000Z');
    expect(iso(localInstant('2026-03-08', 150, 'America/Denver'))).toBe('2026-03-08T09:00:00.000Z');
  });

  test('the days of a half-open period leave out the day it ends on at midnight', () => {
    const from = localDayStart('2026-03-07', 'America/Denver');
    const to = localDayStart('2026-03-10', 'America/Denver');
    expect(localDaysOf(from, to, 'America/Denver')).toEqual(['2026-03-07', '2026-03-08', '2026-03-09']);
    expect(localDaysOf(from, from, 'America/Denver')).toEqual([]);
  });
});
