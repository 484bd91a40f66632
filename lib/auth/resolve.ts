import { withoutTenant } from '../db/tenant';
import type { Access, SignedInUser } from './access';
import { membershipsOf, tokenByHash, type TokenRow } from './doors';
import { lucia } from './lucia';
import { tokenHash } from './tokens';

export interface Credentials {
  access: Access | null;
  user: SignedInUser | null;
  /** What the request showed, whether or not it was valid. */
  shown: 'nothing' | 'cookie' | 'bearer';
  /** A Set-Cookie value: the session was prolonged, or is no longer valid. */
  setCookie: string | null;
}

const NOBODY = { access: null, user: null, setCookie: null } as const;

/** Who asks, by the two headers that can say so. A Bearer token wins over a cookie. */
export async function resolveCredentials(headers: Headers): Promise<Credentials> {
  const authorization = headers.get('authorization');
  if (authorization !== null) {
    const token = lucia().readBearerToken(authorization);
    const row = token === null ? null : await withoutTenant((em) => tokenByHash(em, tokenHash(token)));
    return { ...NOBODY, access: row && tokenAccess(row), shown: 'bearer' };
  }
  const sessionId = lucia().readSessionCookie(headers.get('cookie') ?? '');
  if (sessionId === null || sessionId === '') return { ...NOBODY, shown: 'nothing' };
  return { ...(await resolveSession(sessionId)), shown: 'cookie' };
}

/** The person of a session id and their memberships. */
export async function resolveSession(sessionId: string): Promise<Omit<Credentials, 'shown'>> {
  const { session, user } = await lucia().validateSession(sessionId);
  if (!session) return { ...NOBODY, setCookie: lucia().createBlankSessionCookie().serialize() };
  const memberships = await withoutTenant((em) => membershipsOf(em, user.id));
  return {
    user,
    access: {
      kind: 'session',
      userId: user.id,
      tokenId: null,
      scope: 'session',
      ingestPlantId: null,
      onlyPlantId: null,
      memberships,
      organizationIds: memberships.map((each) => each.organizationId),
    },
    setCookie: session.fresh ? lucia().createSessionCookie(session.id).serialize() : null,
  };
}

function tokenAccess(row: TokenRow): Access {
  return {
    kind: 'token',
    userId: row.created_by,
    tokenId: row.id,
    scope: row.scope,
    ingestPlantId: row.scope === 'ingest' ? row.plant_id : null,
    onlyPlantId: row.plant_id,
    memberships: [
      {
        organizationId: row.organization_id,
        organizationName: row.organization_name,
        role: row.scope === 'manage' ? 'engineer' : 'operator',
      },
    ],
    organizationIds: [row.organization_id],
  };
}
