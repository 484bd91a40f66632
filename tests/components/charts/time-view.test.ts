import { describe, expect, test, vi } from 'vitest';
import { tideKey, zoomAt } from '@/components/charts/tide-keys';
import { tideMarks } from '@/components/charts/tide-marks';
import { createTimeView } from '@/components/charts/time-view';
import { hourlyTide } from '../../support/tide-bars';

const HOUR_MS = 3_600_000;
const FROM = Date.parse('2026-07-13T04:00:00Z');
const BOUNDS = { fromMs: FROM, toMs: FROM + 48 * HOUR_MS };
const hours = (ms: number | null) => (ms === null ? null : (ms - FROM) / HOUR_MS);

describe('the time that charts share', () => {
  test('a zoom stays within the period and is never shorter than asked', () => {
    const view = createTimeView(BOUNDS);
    view.zoom({ fromMs: FROM - 5 * HOUR_MS, toMs: FROM + HOUR_MS }, 8 * HOUR_MS);
    expect(hours(view.get().range.fromMs)).toBe(0);
    expect(hours(view.get().range.toMs)).toBe(8);
  });

  test('back goes one zoom back, and at last to the whole period', () => {
    const view = createTimeView(BOUNDS);
    view.zoom({ fromMs: FROM, toMs: FROM + 20 * HOUR_MS }, HOUR_MS);
    view.zoom({ fromMs: FROM, toMs: FROM + 10 * HOUR_MS }, HOUR_MS);
    view.back();
    expect(hours(view.get().range.toMs)).toBe(20);
    view.back();
    expect(view.get().range).toBe(view.bounds);
  });

  test('a pinned cursor ignores the pointer and follows keys', () => {
    const view = createTimeView(BOUNDS);
    view.pin(FROM + HOUR_MS);
    view.moveCursor(FROM + 5 * HOUR_MS, 'pointer');
    expect(hours(view.get().cursorMs)).toBe(1);
    view.moveCursor(FROM + 5 * HOUR_MS, 'key');
    expect(hours(view.get().cursorMs)).toBe(5);
  });

  test('the same place clicked again lets the cursor go', () => {
    const view = createTimeView(BOUNDS);
    view.pin(FROM);
    view.pin(FROM);
    expect(view.get().pinned).toBe(false);
  });

  test('panning keeps the length and stops at the ends', () => {
    const view = createTimeView(BOUNDS);
    view.zoom({ fromMs: FROM + 4 * HOUR_MS, toMs: FROM + 14 * HOUR_MS }, HOUR_MS);
    view.pan(-30 * HOUR_MS);
    expect([hours(view.get().range.fromMs), hours(view.get().range.toMs)]).toEqual([0, 10]);
  });

  test('who listens is told of changes and of nothing else', () => {
    const view = createTimeView(BOUNDS);
    const listener = vi.fn();
    const stop = view.subscribe(listener);
    view.moveCursor(FROM, 'pointer');
    view.moveCursor(FROM, 'pointer');
    stop();
    view.clear();
    expect(listener).toHaveBeenCalledTimes(1);
  });
});

describe('keys on the strip', () => {
  const flows = Array.from({ length: 48 }, (_, hour) => (hour === 10 || hour === 11 || hour === 30 ? -200 : 150));
  const strip = () => {
    const view = createTimeView(BOUNDS);
    const onOpen = vi.fn();
    const onToggleTable = vi.fn();
    const marks = tideMarks(hourlyTide(FROM, flows));
    const press = (key: string, shiftKey = false) =>
      tideKey({ key, shiftKey }, { view, marks, leastMs: 4 * HOUR_MS, onOpen, onToggleTable });
    return { view, press, onOpen, onToggleTable };
  };
  const bar = (view: ReturnType<typeof createTimeView>) => Math.floor(hours(view.get().cursorMs) ?? -1);

  test('left and right move one bar, with Shift one day, and stop at the ends', () => {
    const { view, press } = strip();
    press('ArrowRight');
    expect(bar(view)).toBe(0);
    press('ArrowRight');
    expect(bar(view)).toBe(1);
    press('ArrowRight', true);
    expect(bar(view)).toBe(25);
    press('End');
    press('ArrowRight');
    expect(bar(view)).toBe(47);
    press('Home');
    press('ArrowLeft');
    expect(bar(view)).toBe(0);
  });

  test('n and p go to the beginning of the next and previous reverse stretch', () => {
    const { view, press } = strip();
    press('n');
    expect(bar(view)).toBe(10);
    press('n');
    expect(bar(view)).toBe(30);
    press('p');
    expect(bar(view)).toBe(10);
  });

  test('plus and minus zoom at the cursor, which keeps its place', () => {
    const { view, press } = strip();
    press('n');
    const before = hours(view.get().cursorMs);
    press('+');
    const { fromMs, toMs } = view.get().range;
    expect((toMs - fromMs) / HOUR_MS).toBe(24);
    expect(((view.get().cursorMs ?? 0) - fromMs) / (toMs - fromMs)).toBeCloseTo((before ?? 0) / 48, 6);
    press('-');
    expect(view.get().range).toBe(view.bounds);
  });

  test('a cursor moved out of view by a key is brought back into it', () => {
    const { view, press } = strip();
    press('Home');
    press('+');
    press('ArrowRight', true);
    const { fromMs, toMs } = view.get().range;
    expect(view.get().cursorMs).toBeGreaterThanOrEqual(fromMs);
    expect(view.get().cursorMs).toBeLessThanOrEqual(toMs);
  });

  test('Enter opens, t shows the table, Escape lets go, and other keys are left to the page', () => {
    const { view, press, onOpen, onToggleTable } = strip();
    expect(press('Enter')).toBe(true);
    expect(press('t')).toBe(true);
    expect(onOpen).toHaveBeenCalledOnce();
    expect(onToggleTable).toHaveBeenCalledOnce();
    view.pin(FROM);
    expect(press('Escape')).toBe(true);
    expect(view.get().pinned).toBe(false);
    expect(press('Escape')).toBe(false);
    expect(press('g')).toBe(false);
  });

  test('without a cursor a zoom is about the middle', () => {
    const view = createTimeView(BOUNDS);
    zoomAt(view, null, 0.5, HOUR_MS);
    expect([hours(view.get().range.fromMs), hours(view.get().range.toMs)]).toEqual([12, 36]);
  });
});
