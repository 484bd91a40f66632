import type { EntityManager } from '@mikro-orm/postgresql';
import { ApiTokenEntity } from '@/entities';
import type { Access } from '../auth/access';
import { notFound } from '../http/problem';
import { requireAction } from '../http/require';
import { recordAudit } from './record-audit';

/** Ends a token at once. 404 for one that is not of the asker's organizations or ended before. */
export async function revokeToken(em: EntityManager, access: Access, tokenId: string): Promise<void> {
  const token = await em.findOne(ApiTokenEntity, {
    id: tokenId,
    organizationId: { $in: access.organizationIds },
    revokedAt: null,
  });
  if (!token) throw notFound('token');
  requireAction(access, token.organizationId, 'token.manage');
  token.revokedAt = new Date();
  await recordAudit(em, access, {
    organizationId: token.organizationId,
    action: 'token.revoked',
    subjectKind: 'token',
    subjectId: token.id,
    detail: { name: token.name },
  });
}
