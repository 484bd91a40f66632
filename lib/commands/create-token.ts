import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { newToken, tokenHash } from '../auth/tokens';
import { queryOne } from '../db/sql';
import { problem } from '../http/problem';
import type { TokenScope } from '../schemas/common';
import { recordAudit } from './record-audit';

/** A key for scripts. The token itself is in this answer and nowhere else; the database keeps its SHA-256. */
export async function createToken(
  em: EntityManager,
  access: Access,
  organizationId: string,
  wanted: { name: string; scope: TokenScope; plantId?: string; expiresAt?: string },
): Promise<{ id: string; token: string }> {
  if (wanted.expiresAt !== undefined && Date.parse(wanted.expiresAt) <= Date.now()) {
    const message = 'Give a time that lies ahead.';
    throw problem(400, 'Invalid input', message, [{ path: 'expiresAt', message }]);
  }
  const token = newToken();
  const row = await queryOne<{ id: string }>(
    em,
    `insert into api_token (organization_id, plant_id, name, scope, token_hash, created_by, expires_at)
     values ($1, $2, $3, $4, $5, $6, $7) returning id`,
    [
      organizationId,
      wanted.plantId ?? null,
      wanted.name,
      wanted.scope,
      tokenHash(token),
      access.userId,
      wanted.expiresAt ?? null,
    ],
  );
  if (!row) throw new Error('createToken: the insert returned no row');
  await recordAudit(em, access, {
    organizationId,
    action: 'token.created',
    subjectKind: 'token',
    subjectId: row.id,
    detail: { name: wanted.name, scope: wanted.scope },
  });
  return { id: row.id, token };
}
