import { createHash } from 'node:crypto';
import type { Adapter, DatabaseSession, DatabaseUser } from 'lucia';
import { isoInstant, query } from '../db/sql';
import { withoutTenant } from '../db/tenant';
import { sessionById } from './doors';

/** Sessions are kept by hash: a copy of the table lets nobody in. */
const stored = (sessionId: string): string => createHash('sha256').update(sessionId).digest('hex');

/** Lucia's storage over the sign-in functions of the database. */
export const sessionAdapter: Adapter = {
  async getSessionAndUser(sessionId): Promise<[DatabaseSession | null, DatabaseUser | null]> {
    const row = await withoutTenant((em) => sessionById(em, stored(sessionId)));
    if (!row) return [null, null];
    const { expiresAt, id, ...attributes } = row;
    return [
      { id: sessionId, userId: id, expiresAt, attributes: {} },
      { id, attributes },
    ];
  },
  // By their hashes: enough to count and to end them all, not to use them.
  async getUserSessions(userId): Promise<DatabaseSession[]> {
    const rows = await withoutTenant((em) =>
      query<{ id: string; user_id: string; expires_at: string }>(
        em,
        `select id, user_id, expires_at from auth_user_sessions($1)`,
        [userId],
      ),
    );
    return rows.map((row) => ({
      id: row.id,
      userId: row.user_id,
      expiresAt: new Date(isoInstant(row.expires_at)),
      attributes: {},
    }));
  },
  async setSession({ id, userId, expiresAt }): Promise<void> {
    await withoutTenant((em) => query(em, `select auth_create_session($1, $2, $3)`, [stored(id), userId, expiresAt]));
  },
  async updateSessionExpiration(sessionId, expiresAt): Promise<void> {
    await withoutTenant((em) => query(em, `select auth_extend_session($1, $2)`, [stored(sessionId), expiresAt]));
  },
  async deleteSession(sessionId): Promise<void> {
    await withoutTenant((em) => query(em, `select auth_delete_session($1)`, [stored(sessionId)]));
  },
  async deleteUserSessions(userId): Promise<void> {
    await withoutTenant((em) => query(em, `select auth_delete_user_sessions($1)`, [userId]));
  },
  async deleteExpiredSessions(): Promise<void> {
    await withoutTenant((em) => query(em, `select auth_delete_expired_sessions()`));
  },
};
