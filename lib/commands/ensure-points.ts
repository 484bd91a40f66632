import type { EntityManager } from '@mikro-orm/postgresql';
import { query } from '../db/sql';
import { IGNORE_ROLE, pointRole } from '../point-roles';
import type { ColumnMapping } from '../trends/types';

interface PointRow {
  id: string;
  role: string;
  unit_index: number;
  ordinal: number;
  source_name: string;
}

/** The unit or branch a mapped column belongs to: 0 for roles that have none, at least 1 for those that do. */
export const unitIndexOf = (column: ColumnMapping): number =>
  column.role !== IGNORE_ROLE && pointRole(column.role).indexed ? (column.unitIndex ?? 1) : 0;

/**
 * The point of each mapped column, made where it is new; null for columns left out. A column keeps the point that carried its
 * name before; a new name takes the first feeder of its role that no other column of this file claims, so that a renamed
 * column goes on with its history and two columns of one role stay two feeders, unless it is said to be a further one.
 *
 * Shapes  result: one entry a column, in order.
 */
export async function ensurePoints(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  columns: readonly ColumnMapping[],
): Promise<(string | null)[]> {
  await query(em, `select 1 from plant where id = $1 and organization_id = $2 for update`, [
    owner.plantId,
    owner.organizationId,
  ]);
  const known = await query<PointRow>(
    em,
    `select id, role, unit_index, ordinal, source_name from point where organization_id = $1 and plant_id = $2`,
    [owner.organizationId, owner.plantId],
  );
  const result: (string | null)[] = columns.map(() => null);
  const claimed = new Set<string>();
  const matches = (point: PointRow, column: ColumnMapping) =>
    point.role === column.role && point.unit_index === unitIndexOf(column) && !claimed.has(point.id);

  columns.forEach((column, index) => {
    const point = known.find((each) => matches(each, column) && each.source_name === column.column);
    if (!point) return;
    claimed.add(point.id);
    result[index] = point.id;
  });
  for (const [index, column] of columns.entries()) {
    if (column.role === IGNORE_ROLE || result[index] !== null) continue;
    const free = column.further
      ? undefined
      : known.filter((each) => matches(each, column)).sort((a, b) => a.ordinal - b.ordinal)[0];
    if (free) {
      await query(em, `update point set source_name = $2 where id = $1`, [free.id, column.column]);
      claimed.add(free.id);
      result[index] = free.id;
      continue;
    }
    const taken = known
      .filter((each) => each.role === column.role && each.unit_index === unitIndexOf(column))
      .map((each) => each.ordinal);
    const ordinal = taken.length === 0 ? 0 : Math.max(...taken) + 1;
    const [made] = await query<PointRow>(
      em,
      `insert into point (organization_id, plant_id, role, unit_index, ordinal, source_name) values ($1, $2, $3, $4, $5, $6)
       returning id, role, unit_index, ordinal, source_name`,
      [owner.organizationId, owner.plantId, column.role, unitIndexOf(column), ordinal, column.column],
    );
    if (!made) throw new Error('ensurePoints: the insert returned no row');
    known.push(made);
    claimed.add(made.id);
    result[index] = made.id;
  }
  return result;
}
