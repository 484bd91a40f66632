import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { decodeCursor, encodeCursor, pageOf } from '@/lib/http/cursor';
import { ProblemError } from '@/lib/http/problem';

const Key = z.tuple([z.number().nullable(), z.string()]);
const refusal = (work: () => unknown): ProblemError => {
  try {
    work();
  } catch (error) {
    if (error instanceof ProblemError) return error;
  }
  throw new Error('nothing was refused');
};

describe('cursors', () => {
  it('come back as the key they were made of', () => {
    expect(decodeCursor(Key, encodeCursor([12.5, '2026-07-01T00:00:00Z']))).toEqual([12.5, '2026-07-01T00:00:00Z']);
    expect(decodeCursor(Key, encodeCursor([null, 'x']))).toEqual([null, 'x']);
  });
  it('are null when absent', () => {
    expect(decodeCursor(Key, undefined)).toBeNull();
  });
  it.each(['', '%%%', 'bm90IGpzb24', encodeCursor(['text', 1]), encodeCursor([1])])(
    'of another making (%s) are refused with 400 at cursor',
    (cursor) => {
      const error = refusal(() => decodeCursor(Key, cursor));
      expect(error.status).toBe(400);
      expect(error.errors?.[0]?.path).toBe('cursor');
    },
  );
});

describe('pageOf', () => {
  const page = (rows: number[], limit: number) =>
    pageOf(
      rows,
      limit,
      (row) => [row, 'k'],
      (row) => `row ${row}`,
    );
  it('hides the row that was read beyond the page and points to the last shown', () => {
    const { items, nextCursor } = page([1, 2, 3], 2);
    expect(items).toEqual(['row 1', 'row 2']);
    expect(decodeCursor(Key, nextCursor ?? '')).toEqual([2, 'k']);
  });
  it('has no next page when no further row was read', () => {
    expect(page([1, 2], 2)).toEqual({ items: ['row 1', 'row 2'], nextCursor: null });
    expect(page([], 2)).toEqual({ items: [], nextCursor: null });
  });
});
