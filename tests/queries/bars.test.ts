import { describe, expect, test } from 'vitest';
import { barAtLeast, barEdges, defaultBarMinutes } from '@/lib/queries/bars';
import { DAY_MS, HOUR_MS, localDayStart } from '@/lib/queries/local-time';

const DENVER = 'America/Denver';
const days = (from: string, to: string, zone = DENVER) => ({
  fromMs: localDayStart(from, zone),
  toMs: localDayStart(to, zone),
});
const lengths = (edges: number[]) => edges.slice(1).map((edge, i) => (edge - (edges[i] ?? 0)) / HOUR_MS);
const local = (edge: number, zone = DENVER) =>
  new Intl.DateTimeFormat('en-GB', { timeZone: zone, hour: '2-digit', minute: '2-digit' }).format(edge);

describe('bars', () => {
  test.each([
    [1, 5],
    [3, 15],
    [7, 60],
    [14, 60],
    [61, 180],
    [365, 1440],
  ])('of %d days are %d minutes long', (count, minutes) => {
    expect(defaultBarMinutes({ fromMs: 0, toMs: count * DAY_MS }, 5)).toBe(minutes);
  });

  test('hold whole intervals of the plant', () => {
    expect(barAtLeast(5, 12)).toBe(12);
    expect(barAtLeast(15, 12)).toBe(60);
    expect(barAtLeast(5, 1)).toBe(5);
  });

  test('of three hours begin at local clock hours on a day of 23 and of 25 hours, and one of them is shorter or longer', () => {
    const spring = barEdges(days('2026-03-08', '2026-03-09'), 180, DENVER);
    expect(spring.slice(0, -1).map((edge) => local(edge))).toEqual([
      '00:00',
      '03:00',
      '06:00',
      '09:00',
      '12:00',
      '15:00',
      '18:00',
      '21:00',
    ]);
    expect(lengths(spring)).toEqual([2, 3, 3, 3, 3, 3, 3, 3]);
    expect(lengths(barEdges(days('2026-11-01', '2026-11-02'), 180, DENVER))).toEqual([4, 3, 3, 3, 3, 3, 3, 3]);
  });

  test('of an hour count the repeated hour twice and the skipped one not at all', () => {
    expect(lengths(barEdges(days('2026-11-01', '2026-11-02'), 60, DENVER))).toHaveLength(25);
    expect(lengths(barEdges(days('2026-03-08', '2026-03-09'), 60, DENVER))).toHaveLength(23);
  });

  test('of an hour begin at local hours in a zone of half hours', () => {
    const edges = barEdges(days('2026-07-01', '2026-07-02', 'Asia/Kolkata'), 60, 'Asia/Kolkata');
    expect(edges.slice(0, 3).map((edge) => local(edge, 'Asia/Kolkata'))).toEqual(['00:00', '01:00', '02:00']);
    const quarters = barEdges(days('2026-07-01', '2026-07-02', 'Asia/Kathmandu'), 20, 'Asia/Kathmandu');
    expect(quarters.slice(0, 3).map((edge) => local(edge, 'Asia/Kathmandu'))).toEqual(['00:00', '00:20', '00:40']);
  });

  test('of a day begin at local midnight, of a week on Monday', () => {
    expect(lengths(barEdges(days('2026-03-07', '2026-03-10'), 1440, DENVER))).toEqual([24, 23, 24]);
    const weeks = barEdges(days('2026-07-01', '2026-07-20'), 10_080, DENVER);
    expect(weeks.map((edge) => new Date(edge).toISOString().slice(0, 10))).toEqual([
      '2026-06-29',
      '2026-07-06',
      '2026-07-13',
      '2026-07-20',
    ]);
  });

  test.each([5, 60, 120, 360, 1440, 10_080])('of %d minutes cover a period that begins and ends anywhere', (bar) => {
    const period = { fromMs: Date.parse('2026-10-30T17:23:00Z'), toMs: Date.parse('2026-11-03T02:41:00Z') };
    const edges = barEdges(period, bar, DENVER);
    expect(edges[0]).toBeLessThanOrEqual(period.fromMs);
    expect(edges[1]).toBeGreaterThan(period.fromMs);
    expect(edges.at(-1)).toBeGreaterThanOrEqual(period.toMs);
    expect(edges.at(-2)).toBeLessThan(period.toMs);
    expect(lengths(edges).every((hours) => hours > 0)).toBe(true);
  });

  test('too many of them are refused', () => {
    expect(() => barEdges(days('2026-01-01', '2026-12-31'), 5, DENVER)).toThrow(/longer ones/);
  });
});
