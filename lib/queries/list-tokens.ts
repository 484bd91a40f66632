import type { EntityManager } from '@mikro-orm/postgresql';
import { z } from 'zod';
import { isoInstant, query } from '../db/sql';
import { decodeCursor, pageOf } from '../http/cursor';
import type { TokenScope } from '../schemas/common';
import type { Token } from '../schemas/session';

type TokenRecord = z.infer<typeof Token>;
interface TokenRow {
  id: string;
  organization_id: string;
  name: string;
  scope: TokenScope;
  plant_id: string | null;
  created_at: string;
  expires_at: string | null;
  last_used_at: string | null;
}
const Key = z.tuple([z.string(), z.uuid()]);

/** Tokens that have not been revoked, the newest first; expired ones are listed until someone revokes them. */
export async function listTokens(
  em: EntityManager,
  organizationIds: readonly string[],
  page: { limit: number; cursor?: string | undefined },
): Promise<{ items: TokenRecord[]; nextCursor: string | null }> {
  const after = decodeCursor(Key, page.cursor);
  const rows = await query<TokenRow & Record<string, unknown>>(
    em,
    `select id, organization_id, name, scope, plant_id, created_at, expires_at, last_used_at from api_token
     where organization_id = any ($1::uuid[]) and revoked_at is null
       and ($2::timestamptz is null or (created_at, id) < ($2, $3::uuid))
     order by created_at desc, id desc limit $4`,
    [organizationIds, after?.[0] ?? null, after?.[1] ?? null, page.limit + 1],
  );
  return pageOf(
    rows,
    page.limit,
    // PostgreSQL's own text: an ISO instant in ms would cut its microseconds off and skip or repeat rows.
    (row) => [row.created_at, row.id],
    (row) => ({
      id: row.id,
      organizationId: row.organization_id,
      name: row.name,
      scope: row.scope,
      plantId: row.plant_id,
      createdAt: isoInstant(row.created_at),
      expiresAt: isoInstant(row.expires_at),
      lastUsedAt: isoInstant(row.last_used_at),
    }),
  );
}
