import { z } from 'zod';
import { problem } from './problem';

/** The sort key of a page's last row as an opaque cursor. */
export const encodeCursor = (key: readonly (string | number | null)[]): string =>
  Buffer.from(JSON.stringify(key)).toString('base64url');

/** The key back, checked against its shape; a cursor that was not ours is a 400. Absent stays null. */
export function decodeCursor<Shape extends z.ZodType>(
  shape: Shape,
  cursor: string | undefined,
): z.output<Shape> | null {
  if (cursor === undefined) return null;
  let key: unknown;
  try {
    key = JSON.parse(Buffer.from(cursor, 'base64url').toString('utf8'));
  } catch {
    key = undefined;
  }
  const result = shape.safeParse(key);
  if (result.success) return result.data;
  const message = 'The cursor is not one of this list: pass on nextCursor as it came, with the same query.';
  throw problem(400, 'Invalid input', message, [{ path: 'cursor', message }]);
}

/**
 * A page of a list that was read with one row more than asked for. `keyOf` gives the sort key of an item; the next page starts
 * after the last item's.
 */
export function pageOf<Row, Item>(
  rows: readonly Row[],
  limit: number,
  keyOf: (row: Row) => readonly (string | number | null)[],
  toItem: (row: Row) => Item,
): { items: Item[]; nextCursor: string | null } {
  const shown = rows.slice(0, limit);
  const last = shown.at(-1);
  return {
    items: shown.map(toItem),
    nextCursor: rows.length > limit && last !== undefined ? encodeCursor(keyOf(last)) : null,
  };
}
