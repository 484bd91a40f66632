import type { EntityManager } from '@mikro-orm/postgresql';
import { z } from 'zod';
import { query } from '../db/sql';
import { decodeCursor, pageOf } from '../http/cursor';
import type { Cause } from '../hydronics/types';
import type { Episode } from '../schemas/results';
import { episodeRecord, SELECT_EPISODE, type EpisodeRow } from './episode-record';
import { apiInstant, type PeriodMs } from './period';

const Key = z.tuple([z.string(), z.uuid()]);

/** Episodes that touch a period, the newest first; with `open` only those nobody has acknowledged. */
export async function listEpisodes(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  period: PeriodMs,
  asked: { limit: number; cursor?: string | undefined; cause?: Cause | undefined; open: boolean },
): Promise<{ items: Episode[]; nextCursor: string | null }> {
  const after = decodeCursor(Key, asked.cursor);
  const rows = await query<EpisodeRow & Record<string, unknown>>(
    em,
    `${SELECT_EPISODE}
     where e.organization_id = $1 and e.plant_id = $2 and e.ended_at > $3 and e.started_at < $4
       and ($5::text is null or e.cause = $5) and (not $6::boolean or e.acknowledged_at is null)
       and ($7::timestamptz is null or (e.started_at, e.id) < ($7, $8::uuid))
     order by e.started_at desc, e.id desc limit $9`,
    [
      owner.organizationId,
      owner.plantId,
      apiInstant(period.fromMs),
      apiInstant(period.toMs),
      asked.cause ?? null,
      asked.open,
      after?.[0] ?? null,
      after?.[1] ?? null,
      asked.limit + 1,
    ],
  );
  return pageOf(rows, asked.limit, (row) => [row.started_at, row.id], episodeRecord);
}
