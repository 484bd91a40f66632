import { fireEvent, render, screen } from '@testing-library/react';
import { describe, expect, test, vi } from 'vitest';
import { HeatCalendar } from '@/components/charts/heat-calendar';
import { media } from '../support/dom-setup';
import { hourRow } from '../support/tide-bars';

const ZONE = 'America/New_York';
const FROM = Date.parse('2026-07-13T04:00:00Z');
const HOUR_MS = 3_600_000;
const HOURS = Array.from({ length: 48 }, (_, hour) =>
  hourRow(new Date(FROM + hour * HOUR_MS).toISOString().replace('.000Z', 'Z'), {
    low: hour % 2 === 0 ? 1 : 0,
    reverseMinutes: hour === 14 ? 60 : 0,
    cause: hour === 14 ? 'reverse-flow' : 'surplus-production',
  }),
);
const plain = (text: string | null) => (text ?? '').replaceAll('\u00a0', ' ');
const name = (pattern: RegExp) => (text: string) => pattern.test(plain(text));

function show() {
  const onSelect = vi.fn();
  const onHover = vi.fn();
  render(
    <HeatCalendar
      hours={HOURS}
      fromMs={FROM}
      toMs={FROM + 48 * HOUR_MS}
      timeZone={ZONE}
      onSelect={onSelect}
      onHover={onHover}
    />,
  );
  return { onSelect, onHover };
}

test('it is a grid of days and hours, with heads for both', () => {
  show();
  expect(screen.getByRole('grid')).toBeTruthy();
  expect(screen.getAllByRole('row')).toHaveLength(3);
  expect(screen.getAllByRole('columnheader')).toHaveLength(25);
  expect(screen.getAllByRole('rowheader').map((head) => plain(head.textContent))).toEqual(['Mon 13', 'Tue 14']);
  expect(screen.getAllByRole('gridcell')).toHaveLength(48);
});

test('a cell says when, which way, how much and why', () => {
  show();
  expect(
    screen.getByRole('gridcell', { name: name(/Mon 13 Jul 14:00, reverse, 550 gpm excess, reverse flow/) }),
  ).toBeTruthy();
  expect(screen.getByRole('gridcell', { name: name(/Mon 13 Jul 01:00, not low/) })).toBeTruthy();
});

describe('keys', () => {
  const focused = () => plain(document.activeElement?.getAttribute('aria-label') ?? '');

  test('one cell is a stop, arrows move an hour or a day, and Enter opens', () => {
    const { onSelect } = show();
    const stops = screen.getAllByRole('gridcell').filter((cell) => cell.getAttribute('tabindex') === '0');
    expect(stops).toHaveLength(1);
    stops[0]?.focus();
    const grid = screen.getByRole('grid');
    fireEvent.keyDown(grid, { key: 'ArrowRight' });
    expect(focused()).toContain('Mon 13 Jul 01:00');
    fireEvent.keyDown(grid, { key: 'ArrowDown' });
    expect(focused()).toContain('Tue 14 Jul 01:00');
    fireEvent.keyDown(grid, { key: 'End' });
    expect(focused()).toContain('Tue 14 Jul 23:00');
    fireEvent.keyDown(grid, { key: 'Enter' });
    expect(onSelect).toHaveBeenCalledWith('2026-07-15T03:00:00Z');
  });

  test('an arrow past the last day stays', () => {
    show();
    const grid = screen.getByRole('grid');
    fireEvent.keyDown(grid, { key: 'ArrowDown' });
    fireEvent.keyDown(grid, { key: 'ArrowDown' });
    expect(focused()).toContain('Tue 14 Jul 00:00');
  });
});

test('the hour under the pointer is told, and none when it leaves', () => {
  const { onHover } = show();
  fireEvent.pointerEnter(screen.getByRole('gridcell', { name: name(/Mon 13 Jul 14:00/) }));
  expect(onHover).toHaveBeenCalledWith('2026-07-13T18:00:00Z');
  fireEvent.pointerLeave(screen.getByRole('grid'));
  expect(onHover).toHaveBeenLastCalledWith(null);
});

test('on a phone the first tap makes the day tall, the second chooses the hour', () => {
  media.add('(max-width: 760px)');
  const { onSelect } = show();
  const cell = screen.getByRole('gridcell', { name: name(/Mon 13 Jul 14:00/) });
  fireEvent.click(cell);
  expect(onSelect).not.toHaveBeenCalled();
  expect(Number(cell.querySelector('rect')?.getAttribute('height'))).toBeGreaterThanOrEqual(43);
  fireEvent.click(cell);
  expect(onSelect).toHaveBeenCalledWith('2026-07-13T18:00:00Z');
});

test('the key states the flow that a full square stands for', () => {
  show();
  expect(plain(screen.getByText(/excess, forward/).textContent)).toContain('200, 500, 1,100 gpm');
});
