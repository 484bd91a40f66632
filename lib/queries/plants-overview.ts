import type { EntityManager } from '@mikro-orm/postgresql';
import { z } from 'zod';
import type { Access } from '../auth/access';
import { compareAttention, groundOf, whyItStandsHere } from '../client/attention';
import { addDays } from '../db/days';
import { isoInstant, query } from '../db/sql';
import { decodeCursor, encodeCursor } from '../http/cursor';
import { plantModelFromSettings } from '../hydronics/plant-model';
import type { OverviewPlant } from '../schemas/overview';
import { PlantSettings } from '../schemas/plant';
import { localDayOf } from './local-time';
import { readOverviewBars, type PlantWindow } from './overview-bars';
import { readWeeks } from './overview-week';
import { SELECT_PLANT, type PlantRow } from './plant-record';

const DAYS = 7;
/** The cursor is the rank reached: the order is made anew from facts of the day each time. */
const Key = z.tuple([z.number().int().nonnegative()]);

type Unranked = Omit<OverviewPlant, 'rank' | 'bars' | 'ground' | 'why'>;

/** The asker's plants in the order in which to look at them, with the week behind each. */
export async function plantsOverview(
  em: EntityManager,
  access: Access,
  page: { limit: number; cursor?: string | undefined; units: 'ip' | 'si' },
  nowMs: number,
): Promise<{ items: OverviewPlant[]; nextCursor: string | null }> {
  const after = decodeCursor(Key, page.cursor)?.[0] ?? 0;
  const plants = await readPlants(em, access, nowMs);
  plants.sort(compareAttention);
  const shown = plants.slice(after, after + page.limit);
  const windows: PlantWindow[] = shown.map(({ id, firstDay, lastDay }) => ({ plantId: id, firstDay, lastDay }));
  const bars = await readOverviewBars(em, access.organizationIds, windows);
  return {
    items: shown.map((plant, index) => ({
      ...plant,
      bars: bars.get(plant.id) ?? [],
      ground: groundOf(plant),
      why: whyItStandsHere(plant, page.units),
      rank: after + index + 1,
    })),
    nextCursor: after + page.limit < plants.length ? encodeCursor([after + page.limit]) : null,
  };
}

async function readPlants(em: EntityManager, access: Access, nowMs: number): Promise<Unranked[]> {
  const rows = await query<PlantRow & Record<string, unknown>>(
    em,
    `${SELECT_PLANT} where p.organization_id = any ($1::uuid[]) and p.deleted_at is null and ($2::uuid is null or p.id = $2)`,
    [access.organizationIds, access.onlyPlantId],
  );
  const windows = rows.map((row): PlantWindow => {
    const lastDay = addDays(localDayOf(nowMs, row.time_zone), -1);
    return { plantId: row.id, firstDay: addDays(lastDay, 1 - DAYS), lastDay };
  });
  const weeks = await readWeeks(em, access.organizationIds, windows);
  const episodes = await countOpenEpisodes(em, access.organizationIds, windows);
  const uploads = await readLastUploads(em, access.organizationIds);
  return rows.map((row, index) => {
    const window = windows[index];
    const found = weeks.get(row.id);
    if (!window || !found) throw new Error(`plantsOverview: no week of plant ${row.id}`);
    const settings = PlantSettings.parse(row.settings);
    const { model } = plantModelFromSettings(settings, row.arrangement);
    return {
      id: row.id,
      organizationId: row.organization_id,
      organizationName: row.organization_name,
      name: row.name,
      timeZone: row.time_zone,
      arrangement: row.arrangement,
      currency: settings.tariff?.currency ?? null,
      criticalLoads: settings.design.criticalLoads,
      designFlowGpm: model.distributionPumps.flowGpm,
      targetSupplyF: model.blendedSupplyF ?? model.productionSupplyF,
      firstDay: window.firstDay,
      lastDay: window.lastDay,
      days: found.days,
      yesterday: found.days.find((day) => day.day === window.lastDay) ?? null,
      week: found.week,
      openEpisodes: episodes.get(row.id) ?? 0,
      dataThrough: isoInstant(row.data_through),
      lastUpload: uploads.get(row.id) ?? null,
    };
  });
}

/** Episodes of the shown days that nobody has acknowledged. */
async function countOpenEpisodes(
  em: EntityManager,
  organizationIds: readonly string[],
  windows: readonly PlantWindow[],
): Promise<Map<string, number>> {
  const rows = await query<{ plant_id: string; open: number }>(
    em,
    `select e.plant_id, count(*)::integer as open
     from unnest($2::uuid[], $3::date[]) as w(plant_id, first_day) join plant p on p.id = w.plant_id
     join episode e on e.plant_id = w.plant_id and e.ended_at > w.first_day::timestamp at time zone p.time_zone
     where e.organization_id = any ($1::uuid[]) and e.acknowledged_at is null group by e.plant_id`,
    [organizationIds, windows.map((each) => each.plantId), windows.map((each) => each.firstDay)],
  );
  return new Map(rows.map((row) => [row.plant_id, row.open]));
}

async function readLastUploads(
  em: EntityManager,
  organizationIds: readonly string[],
): Promise<Map<string, NonNullable<OverviewPlant['lastUpload']>>> {
  const rows = await query<{
    plant_id: string;
    id: string;
    filename: string;
    status: NonNullable<OverviewPlant['lastUpload']>['status'];
    created_at: string;
    problem: string | null;
  }>(
    em,
    `select p.id as plant_id, u.id, u.filename, u.status, u.created_at,
            jsonb_path_query_first(u.problems, '$[*] ? (@.severity == "error").message') #>> '{}' as problem
     from plant p cross join lateral (
       select * from upload u where u.plant_id = p.id and u.removed_at is null order by u.created_at desc limit 1) u
     where p.organization_id = any ($1::uuid[]) and p.deleted_at is null`,
    [organizationIds],
  );
  return new Map(
    rows.map(({ plant_id, created_at, ...upload }) => [plant_id, { ...upload, createdAt: isoInstant(created_at) }]),
  );
}
