import { describe, expect, test } from 'vitest';
import * as marks from '@/components/charts/tide-marks';
import { emptyBar, hourlyTide, steadyBar } from '../../support/tide-bars';

const FROM = Date.parse('2026-07-13T04:00:00Z');
const HOUR_MS = 3_600_000;

test('a bar’s direction is the one that held most minutes, and none where nothing was read', () => {
  const bar = emptyBar(FROM);
  expect(marks.directionOf(bar)).toBeNull();
  expect(marks.directionOf({ ...bar, forwardMinutes: 20, reverseMinutes: 25, unknownMinutes: 15 })).toBe('reverse');
  expect(marks.directionOf({ ...bar, forwardMinutes: 30, unknownMinutes: 30 })).toBe('forward');
});

test('ink is densest at 95 %, and least where the probability is not known', () => {
  expect([0.97, 0.95, 0.9, 0.85, 0.8, null].map(marks.densityOf)).toEqual([3, 3, 2, 2, 1, 1]);
});

test('a bar that flowed both ways stands above and below the line, and its two parts are its mean flow', () => {
  const tide = hourlyTide(FROM, [100]);
  const both = {
    ...steadyBar(FROM, 'forward', 300),
    forwardMinutes: 45,
    reverseMinutes: 15,
    forwardFlowGpm: 400,
    reverseFlowGpm: 200,
  };
  const [mark] = marks.tideMarks({ ...tide, bars: [both] });
  expect(mark).toMatchObject({ split: true, forwardGpm: 300, reverseGpm: -50 });
});

test('an unknown bar has no height, only its interval', () => {
  const [mark] = marks.tideMarks(hourlyTide(FROM, ['unknown']));
  expect(mark).toMatchObject({ direction: 'unknown', forwardGpm: 0, reverseGpm: 0, loGpm: -50, hiGpm: 50 });
});

test('a bar ends where its neighbour begins, and keeps its own length before a gap', () => {
  const tide = { ...hourlyTide(FROM, []), barMinutes: 1440 };
  const at = [0, 23, 47, 95].map((hours) => steadyBar(FROM + hours * HOUR_MS, 'forward', 100));
  const ends = marks.tideMarks({ ...tide, bars: at }).map((mark) => (mark.endMs - FROM) / HOUR_MS);
  expect(ends).toEqual([23, 47, 71, 119]);
});

describe('where nothing was read', () => {
  const tide = hourlyTide(FROM, [100, null, null, 100]);
  const drawn = marks.tideMarks(tide);

  test('the still line is broken', () => {
    expect(
      marks.dataRuns(drawn).map(({ startMs, endMs }) => [(startMs - FROM) / HOUR_MS, (endMs - FROM) / HOUR_MS]),
    ).toEqual([
      [0, 1],
      [3, 4],
    ]);
  });

  test('the gap is known, and so is the one after the last bar', () => {
    const gaps = marks.dataGaps(drawn, FROM, FROM + 6 * HOUR_MS);
    expect(gaps.map(({ startMs, endMs }) => [(startMs - FROM) / HOUR_MS, (endMs - FROM) / HOUR_MS])).toEqual([
      [1, 3],
      [4, 6],
    ]);
  });
});

test('the keys n and p stop where a reverse stretch begins', () => {
  const drawn = marks.tideMarks(hourlyTide(FROM, [100, -50, -80, 20, -30]));
  expect(marks.reverseStarts(drawn).map((mark) => mark.index)).toEqual([1, 4]);
});

test('a mark is found by any instant in it, and none outside', () => {
  const drawn = marks.tideMarks(hourlyTide(FROM, [1, 2, 3, 4, 5]));
  expect(marks.markAt(drawn, FROM + 2.99 * HOUR_MS)?.index).toBe(2);
  expect(marks.markAt(drawn, FROM + 3 * HOUR_MS)?.index).toBe(3);
  expect(marks.markAt(drawn, FROM - 1)).toBeNull();
  expect(marks.markAt(drawn, FROM + 5 * HOUR_MS)).toBeNull();
});

describe('the extent of the strip', () => {
  test('holds every bar on both sides of zero', () => {
    const extent = marks.tideExtent(marks.tideMarks(hourlyTide(FROM, [800, -500])));
    expect(extent.hiGpm).toBeGreaterThan(800);
    expect(extent.loGpm).toBeLessThan(-500);
    expect(extent.hiGpm).toBeLessThan(1000);
  });

  test('keeps room on a side with nothing on it, so that its emptiness is seen', () => {
    const extent = marks.tideExtent(marks.tideMarks(hourlyTide(FROM, [700, 650])));
    expect(extent.loGpm).toBeLessThanOrEqual(-700 / 7);
  });

  test('noise about zero stays small', () => {
    const extent = marks.tideExtent(marks.tideMarks(hourlyTide(FROM, [4, -3])), 200);
    expect(extent).toEqual({ loGpm: -200, hiGpm: 200 });
  });

  test('one bar far beyond the others is left to be cut flat', () => {
    const flows = [...Array.from({ length: 99 }, (_, index) => 300 + index), 9000];
    const extent = marks.tideExtent(marks.tideMarks(hourlyTide(FROM, flows)));
    expect(extent.hiGpm).toBeGreaterThan(398);
    expect(extent.hiGpm).toBeLessThan(1000);
  });

  test('the one deep hour of a calm week is not cut: it is what the strip is for', () => {
    const flows = [...Array.from({ length: 167 }, () => -20), -966];
    expect(marks.tideExtent(marks.tideMarks(hourlyTide(FROM, flows))).loGpm).toBeLessThan(-966);
  });

  test('has some size even without a bar', () => {
    const { loGpm, hiGpm } = marks.tideExtent([]);
    expect(loGpm).toBeLessThan(0);
    expect(hiGpm).toBeGreaterThan(0);
  });
});
