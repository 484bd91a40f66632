import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as getDays } from '@/app/api/v1/plants/[plantId]/days/route';
import { GET as getEpisodes } from '@/app/api/v1/plants/[plantId]/episodes/route';
import { Episode, PlantDay } from '@/lib/schemas/results';
import { ask } from '../support/api';
import { setScene, type Scene } from './data-scene';

let scene: Scene;
beforeAll(async () => {
  scene = await setScene();
  const { owner } = scene.api;
  for (let day = 1; day <= 20; day++) {
    await owner.query(
      `insert into plant_day (organization_id, plant_id, day, reverse_minutes, unknown_minutes, running_minutes, low_hours, warmest_supply_f, coverage)
       values ($1, $2, $3, $4, 0, 1440, 2, 47.5, 1)`,
      [scene.organizationId, scene.plantId, `2026-07-${String(day).padStart(2, '0')}`, day * 10],
    );
    // Three episodes begin at each of these instants: only their ids tell them apart.
    for (const cause of ['reverse-flow', 'coil-shortfall', 'warm-supply']) {
      await owner.query(
        `insert into episode (organization_id, plant_id, cause, started_at, ended_at, hours, worst_hour, acknowledged_at, acknowledged_by)
         values ($1, $2, $3, $4::timestamptz, $4::timestamptz + interval '5 hours', 5, $4::timestamptz + interval '1 hour', $5, $6)`,
        [
          scene.organizationId,
          scene.plantId,
          cause,
          `2026-07-${String(day).padStart(2, '0')}T12:00:00Z`,
          day % 2 === 0 ? '2026-07-21T12:00:00Z' : null,
          day % 2 === 0 ? scene.operator.userId : null,
        ],
      );
    }
  }
});
afterAll(() => scene.api.close());

type Handler = Parameters<typeof ask>[0];
async function pages<Item>(handler: Handler, query: string): Promise<Item[]> {
  const seen: Item[] = [];
  let cursor: string | null = null;
  do {
    const path: string = `/x?${query}${cursor === null ? '' : `&cursor=${cursor}`}`;
    const response = await ask(handler, 'GET', {
      path,
      params: { plantId: scene.plantId },
      cookie: scene.operator.cookie,
    });
    const page = (await response.json()) as { items: Item[]; nextCursor: string | null };
    seen.push(...page.items);
    cursor = page.nextCursor;
  } while (cursor !== null);
  return seen;
}

describe('the days', () => {
  it('of a half-open period are those it touches, in order, in pages without a gap', async () => {
    const days = await pages<PlantDay>(getDays, 'from=2026-07-03&to=2026-07-18&limit=4');
    expect(days.map(({ day }) => day)).toEqual(
      Array.from({ length: 15 }, (_, index) => `2026-07-${String(index + 3).padStart(2, '0')}`),
    );
    expect(days.map((day) => PlantDay.parse(day))).toEqual(days);
    expect(days[0]).toMatchObject({ reverseMinutes: 30, lowHours: 2, warmestSupplyF: 47.5, excessCost: null });
  });

  it('come all at once when nobody asks for pages', async () => {
    expect(await pages<PlantDay>(getDays, 'from=2026-07-01&to=2026-08-01')).toHaveLength(20);
  });
});

describe('the episodes', () => {
  it('stand newest first in pages without a gap or a repeat, also where several began at once', async () => {
    const episodes = await pages<Episode>(getEpisodes, 'from=2026-07-01&to=2026-08-01&limit=7');
    expect(episodes).toHaveLength(60);
    expect(new Set(episodes.map(({ id }) => id)).size).toBe(60);
    const starts = episodes.map(({ startedAt }) => startedAt);
    expect(starts).toEqual(starts.toSorted().reverse());
    expect(episodes.map((episode) => Episode.parse(episode))).toEqual(episodes);
  });

  it('are those that touch the period, of one cause or unacknowledged when asked for', async () => {
    const touching = 'from=2026-07-05T16:00:00Z&to=2026-07-06T12:00:00Z';
    expect((await pages<Episode>(getEpisodes, touching)).map(({ startedAt }) => startedAt)).toEqual(
      Array(3).fill('2026-07-05T12:00:00.000Z'),
    );
    const caused = await pages<Episode>(getEpisodes, 'from=2026-07-01&to=2026-08-01&cause=warm-supply');
    expect(caused).toHaveLength(20);
    const open = await pages<Episode>(getEpisodes, 'from=2026-07-01&to=2026-08-01&open=true');
    expect(open).toHaveLength(30);
    expect(open.every(({ acknowledgedAt }) => acknowledgedAt === null)).toBe(true);
  });
});
