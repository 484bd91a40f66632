import type { EntityManager } from '@mikro-orm/postgresql';
import { readBands, readBlocks } from '../db/blocks';
import { addDays, dayStartMs } from '../db/days';
import { query } from '../db/sql';
import { POINT_ROLE_NAMES, pointRole, type PointRoleName } from '../point-roles';
import type { Coverage } from '../schemas/data-requests';
import { figure } from './figures';
import { localDaysOf, localDayStart, MINUTE_MS } from './local-time';
import { apiInstant, blockDays, type PeriodMs } from './period';

/** Beyond this many values the hourly bands are counted instead: a bar a day cannot show the difference. */
const MOST_VALUES = 500_000;
/** UTC days of samples held in memory at once. */
const SLICE_DAYS = 31;

interface PointRow {
  id: string;
  role: string;
  unit_index: number;
  ordinal: number;
  source_name: string;
}

/**
 * How much of each local day arrived, point by point: the share of the day's intervals that hold a value. The period is widened
 * to whole local days. Of a long period at a short step it is the share of the day's hours that hold any.
 */
export async function readCoverage(
  em: EntityManager,
  plant: { id: string; organizationId: string; timeZone: string; stepMinutes: number },
  asked: PeriodMs,
): Promise<Coverage> {
  const owner = { organizationId: plant.organizationId, plantId: plant.id };
  const days = localDaysOf(asked.fromMs, asked.toMs, plant.timeZone);
  const lastDay = days.at(-1) ?? '';
  const edges = [...days, addDays(lastDay, 1)].map((day) => localDayStart(day, plant.timeZone));
  const period = { fromMs: edges[0] ?? asked.fromMs, toMs: edges.at(-1) ?? asked.toMs };
  const points = await query<PointRow & Record<string, unknown>>(
    em,
    `select id, role, unit_index, ordinal, source_name from point where organization_id = $1 and plant_id = $2`,
    [owner.organizationId, owner.plantId],
  );
  const counts = new Map(points.map((point) => [point.id, new Float64Array(days.length)]));
  const byHours = (points.length * days.length * 1440) / plant.stepMinutes > MOST_VALUES;
  const stepMinutes = byHours ? 60 : plant.stepMinutes;
  const { fromDay, toDay } = blockDays(period);
  for (let first = fromDay; first <= toDay; first = addDays(first, SLICE_DAYS)) {
    const end = addDays(first, SLICE_DAYS - 1);
    const last = end < toDay ? end : toDay;
    const blocks = byHours
      ? (await readBands(em, owner, first, last, [...counts.keys()])).map((each) => ({ ...each, values: each.mean }))
      : await readBlocks(em, owner, first, last);
    for (const { pointId, day, values } of blocks) {
      const into = counts.get(pointId);
      if (into && values.length * stepMinutes === 1440) count(values, dayStartMs(day), stepMinutes, edges, into);
    }
  }
  const slotsOf = (index: number) => ((edges[index + 1] ?? 0) - (edges[index] ?? 0)) / MINUTE_MS / stepMinutes;
  return {
    from: apiInstant(period.fromMs),
    to: apiInstant(period.toMs),
    stepMinutes: plant.stepMinutes as Coverage['stepMinutes'],
    days,
    points: points.sort(byRole).map((point) => {
      const held = counts.get(point.id) ?? new Float64Array(days.length);
      const total = held.reduce((sum, each) => sum + each, 0);
      return {
        role: point.role,
        unitIndex: point.unit_index,
        ordinal: point.ordinal,
        label: labelOf(point),
        sourceName: point.source_name,
        shares: Array.from(held, (each, index) => figure(Math.min(1, each / slotsOf(index))) ?? 0),
        share: figure(Math.min(1, (total * stepMinutes * MINUTE_MS) / (period.toMs - period.fromMs))) ?? 0,
      };
    }),
  };
}

/** Counts the values of a UTC day block into the local days they begin in. */
function count(
  values: Float32Array,
  startMs: number,
  stepMinutes: number,
  edges: readonly number[],
  into: Float64Array,
): void {
  const stepMs = stepMinutes * MINUTE_MS;
  let day = edges.findIndex((edge, index) => startMs < (edges[index + 1] ?? Infinity) && edge <= startMs);
  if (day < 0) day = 0;
  for (let slot = 0; slot < values.length; slot++) {
    const at = startMs + slot * stepMs;
    if (at < (edges[0] ?? 0)) continue;
    while (at >= (edges[day + 1] ?? Infinity)) day++;
    if (day >= into.length) return;
    if (!Number.isNaN(values[slot] ?? NaN)) into[day] = (into[day] ?? 0) + 1;
  }
}

const roleOrder = new Map<string, number>(POINT_ROLE_NAMES.map((name, index) => [name, index]));
const byRole = (left: PointRow, right: PointRow): number =>
  (roleOrder.get(left.role) ?? 0) - (roleOrder.get(right.role) ?? 0) ||
  left.unit_index - right.unit_index ||
  left.ordinal - right.ordinal;

function labelOf(point: PointRow): string {
  const { label, indexed } = pointRole(point.role as PointRoleName);
  return indexed ? `${label} ${point.unit_index}` : label;
}
