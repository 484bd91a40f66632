import { describe, expect, test } from 'vitest';
import { heatCellName, heatRows, hourDirection, squareSide } from '@/components/charts/heat-cells';
import { hourRow } from '../../support/tide-bars';

const ZONE = 'America/New_York';
const at = (iso: string) => Date.parse(iso);

test('the area of a square is its excess: a quarter of the flow is half the side', () => {
  expect(squareSide(1100, 1100, 22)).toBe(20);
  expect(squareSide(275, 1100, 22)).toBe(10);
  expect(squareSide(1, 1100, 22)).toBe(3.2);
  expect(squareSide(9000, 1100, 22)).toBe(20);
});

test('an hour goes by what held most of it', () => {
  expect(hourDirection({ reverseMinutes: 40, unknownMinutes: 5 })).toBe('reverse');
  expect(hourDirection({ reverseMinutes: 5, unknownMinutes: 40 })).toBe('unknown');
  expect(hourDirection({ reverseMinutes: 0, unknownMinutes: 0 })).toBe('forward');
});

describe('rows', () => {
  const rows = (hours: Parameters<typeof heatRows>[0], from: string, to: string) =>
    heatRows(hours, at(from), at(to), ZONE);

  test('an hour stands in its local day and clock', () => {
    const [first, second] = rows([hourRow('2026-07-15T02:00:00Z')], '2026-07-14T04:00:00Z', '2026-07-16T04:00:00Z');
    expect(first?.cells.map((cell) => cell.clock)).toEqual([22]);
    expect(second?.cells).toEqual([]);
  });

  test('an hour in which nothing was read is blank', () => {
    const hours = [hourRow('2026-07-14T12:00:00Z', { quality: 0, loadTons: null })];
    expect(rows(hours, '2026-07-14T04:00:00Z', '2026-07-15T04:00:00Z')[0]?.cells).toEqual([]);
  });

  test('the hour that clocks repeat is two half cells', () => {
    const hours = ['2026-11-01T04:00:00Z', '2026-11-01T05:00:00Z', '2026-11-01T06:00:00Z'].map((start) =>
      hourRow(start),
    );
    const [day] = rows(hours, '2026-11-01T04:00:00Z', '2026-11-02T05:00:00Z');
    expect(day?.cells.map((cell) => [cell.clock, cell.half])).toEqual([
      [0, 'whole'],
      [1, 'first'],
      [1, 'second'],
    ]);
  });

  test('the hour that clocks skip is a gap', () => {
    const hours = ['2026-03-08T06:00:00Z', '2026-03-08T07:00:00Z'].map((start) => hourRow(start));
    const [day] = rows(hours, '2026-03-08T05:00:00Z', '2026-03-09T04:00:00Z');
    expect(day?.cells.map((cell) => cell.clock)).toEqual([1, 3]);
  });

  test('a week begins with a rule, but not above the first day', () => {
    expect(rows([], '2026-07-13T04:00:00Z', '2026-07-21T04:00:00Z').map((row) => row.opensWeek)).toEqual([
      false,
      ...Array.from({ length: 6 }, () => false),
      true,
    ]);
  });
});

test('a cell’s name says when, which way, how much and why', () => {
  const hour = hourRow('2026-07-24T19:00:00Z', { reverseMinutes: 60, excessFlowGpm: 919, cause: 'reverse-flow' });
  const [row] = heatRows([hour], at('2026-07-24T04:00:00Z'), at('2026-07-25T04:00:00Z'), ZONE);
  const cell = row?.cells[0];
  if (cell === undefined) throw new Error('no cell');
  expect(heatCellName(cell, ZONE, 'ip').replaceAll('\u00a0', ' ')).toBe(
    'Fri 24 Jul 15:00, reverse, 919 gpm excess, reverse flow',
  );
});

test('an hour that is not low is a point, however it flowed', () => {
  const hour = hourRow('2026-07-24T19:00:00Z', { low: 0, reverseMinutes: 60 });
  expect(heatRows([hour], at('2026-07-24T04:00:00Z'), at('2026-07-25T04:00:00Z'), ZONE)[0]?.cells[0]?.kind).toBe(
    'not low',
  );
});
