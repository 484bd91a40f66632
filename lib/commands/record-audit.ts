import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { query } from '../db/sql';

/** Writes who did what to the organization's audit trail, in the transaction that does it. Never a secret in `detail`. */
export async function recordAudit(
  em: EntityManager,
  access: Access,
  event: {
    organizationId: string;
    /** `noun.verb`, such as `plant.updated`. */
    action: string;
    subjectKind: string;
    subjectId: string;
    detail?: Record<string, unknown>;
  },
): Promise<void> {
  await query(
    em,
    `insert into audit_event (organization_id, actor_user_id, actor_token_id, action, subject_kind, subject_id, detail)
     values ($1, $2, $3, $4, $5, $6, $7)`,
    [
      event.organizationId,
      access.kind === 'session' ? access.userId : null,
      access.tokenId,
      event.action,
      event.subjectKind,
      event.subjectId,
      JSON.stringify(event.detail ?? {}),
    ],
  );
}
