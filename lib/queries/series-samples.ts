import type { EntityManager } from '@mikro-orm/postgresql';
import { readBands, readBlocks } from '../db/blocks';
import { addDays } from '../db/days';
import { query } from '../db/sql';
import { blockDays, type PeriodMs } from './period';
import { combineFeeders, type Combine, type SeriesBars, type Stretch } from './series-bars';
import type { SeriesSource } from './series-points';

/** UTC days held in memory at once: of values, and of bands, which are 24 a day. */
const SLICE_DAYS = { values: 31, bands: 400 } as const;

type RoleSource = Extract<SeriesSource, { kind: 'role' }>;
interface SamplesToRead {
  organizationId: string;
  plantId: string;
  period: PeriodMs;
  stepMinutes: number;
  /** From the hourly bands instead of the values. */
  bands: boolean;
}

/** Flows and powers of several feeders add up; of everything else there is a mean. */
const combineOf = ({ quantity }: RoleSource): Combine => (quantity === 'flow' || quantity === 'power' ? 'sum' : 'mean');

/** Adds the stored samples of roles to the bars of each. */
export async function addSamples(
  em: EntityManager,
  read: SamplesToRead,
  sources: readonly RoleSource[],
  bars: ReadonlyMap<string, SeriesBars>,
): Promise<void> {
  const { fromDay, toDay } = blockDays(read.period);
  // A feeder without a single value in the period (a meter replaced long ago) does not make the whole sum missing.
  const present = await pointsWithData(em, read, fromDay, toDay, sources);
  if (present.size === 0) return;
  const step = read.bands ? SLICE_DAYS.bands : SLICE_DAYS.values;
  for (let first = fromDay; first <= toDay; first = addDays(first, step)) {
    const end = addDays(first, step - 1);
    const days = await readStretches(em, read, first, end < toDay ? end : toDay, [...present]);
    for (const source of sources) {
      const feeders = source.pointIds.filter((id) => present.has(id));
      for (const points of days) {
        const found = feeders.flatMap((id) => points.get(id) ?? []);
        const one = combineFeeders(found, combineOf(source), feeders.length - found.length);
        if (one) bars.get(source.point)?.add(one);
      }
    }
  }
}

async function pointsWithData(
  em: EntityManager,
  read: SamplesToRead,
  fromDay: string,
  toDay: string,
  sources: readonly RoleSource[],
): Promise<Set<string>> {
  const rows = await query<{ point_id: string }>(
    em,
    `select distinct point_id from sample_block
     where organization_id = $1 and plant_id = $2 and day between $3 and $4 and point_id = any ($5)`,
    [read.organizationId, read.plantId, fromDay, toDay, sources.flatMap((source) => source.pointIds)],
  );
  return new Set(rows.map((row) => row.point_id));
}

/** The stretches of some UTC days, by point, a day an entry, in order. */
async function readStretches(
  em: EntityManager,
  read: SamplesToRead,
  fromDay: string,
  toDay: string,
  pointIds: readonly string[],
): Promise<Map<string, Stretch>[]> {
  const days = new Map<string, Map<string, Stretch>>();
  const put = (pointId: string, stretch: Stretch) => {
    const day = days.get(stretch.day) ?? new Map<string, Stretch>();
    days.set(stretch.day, day.set(pointId, stretch));
  };
  if (read.bands) {
    for (const { pointId, day, lo, mean, hi } of await readBands(em, read, fromDay, toDay, pointIds)) {
      put(pointId, { day, stepMinutes: 60, lo, mean, hi });
    }
  } else {
    const slots = 1440 / read.stepMinutes;
    for (const { pointId, day, values } of await readBlocks(em, read, fromDay, toDay, pointIds)) {
      // Of a step the plant no longer has: its slots do not lie where these do.
      if (values.length !== slots) continue;
      put(pointId, { day, stepMinutes: read.stepMinutes, lo: values, mean: values, hi: values });
    }
  }
  return [...days.values()];
}
