import type { EntityManager } from '@mikro-orm/postgresql';
import type { z } from 'zod';
import type { Access } from '../auth/access';
import { query } from '../db/sql';
import type { PatchEpisode } from '../schemas/episode';
import { recordAudit } from './record-audit';

/** Marks an episode as seen (or not), and keeps what was said of it. The first to acknowledge stays the one who did. */
export async function acknowledgeEpisode(
  em: EntityManager,
  access: Access,
  episode: { id: string; organizationId: string },
  patch: z.output<typeof PatchEpisode>,
): Promise<void> {
  const person = access.kind === 'session' ? access.userId : null;
  await query(
    em,
    `update episode set
       acknowledged_at = case when $3::boolean is null then acknowledged_at when $3 then coalesce(acknowledged_at, now()) end,
       acknowledged_by = case when $3::boolean is null or ($3 and acknowledged_at is not null) then acknowledged_by
                              when $3 then $4::uuid end,
       note = case when $5 then $6 else note end
     where id = $1 and organization_id = $2`,
    [
      episode.id,
      episode.organizationId,
      patch.acknowledged ?? null,
      person,
      patch.note !== undefined,
      patch.note === '' ? null : (patch.note ?? null),
    ],
  );
  await recordAudit(em, access, {
    organizationId: episode.organizationId,
    action: 'episode.updated',
    subjectKind: 'episode',
    subjectId: episode.id,
    detail: { acknowledged: patch.acknowledged ?? null, noted: patch.note !== undefined },
  });
}
