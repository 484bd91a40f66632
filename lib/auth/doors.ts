/**
 * The narrow SQL functions that answer before a tenant is known: sign-in, token look-up, sign-up. The application's database
 * role reads passwords' hashes and sessions through these alone.
 */
import type { EntityManager } from '@mikro-orm/postgresql';
import { isoInstant, query, queryOne } from '../db/sql';
import type { Role, TokenScope } from '../schemas/common';
import type { AccessMembership, SignedInUser } from './access';

export const userByEmail = (em: EntityManager, email: string): Promise<{ id: string; password_hash: string } | null> =>
  queryOne(em, `select id, password_hash from auth_user_by_email($1)`, [email]);

export interface SessionRow extends SignedInUser {
  expiresAt: Date;
}

export async function sessionById(em: EntityManager, sessionHash: string): Promise<SessionRow | null> {
  const row = await queryOne<{
    user_id: string;
    expires_at: string;
    email: string;
    name: string;
    unit_system: 'ip' | 'si';
  }>(em, `select user_id, expires_at, email, name, unit_system from auth_session($1)`, [sessionHash]);
  if (!row) return null;
  return {
    id: row.user_id,
    email: row.email,
    name: row.name,
    unitSystem: row.unit_system,
    expiresAt: new Date(isoInstant(row.expires_at)),
  };
}

export async function membershipsOf(em: EntityManager, userId: string): Promise<AccessMembership[]> {
  const rows = await query<{ organization_id: string; organization_name: string; role: Role }>(
    em,
    `select organization_id, organization_name, role from auth_memberships($1)`,
    [userId],
  );
  return rows.map((row) => ({
    organizationId: row.organization_id,
    organizationName: row.organization_name,
    role: row.role,
  }));
}

export interface TokenRow {
  id: string;
  organization_id: string;
  organization_name: string;
  plant_id: string | null;
  scope: TokenScope;
  created_by: string | null;
}

/** A live token by its SHA-256; marks it as used. */
export const tokenByHash = (em: EntityManager, hash: Buffer): Promise<TokenRow | null> =>
  queryOne(em, `select id, organization_id, organization_name, plant_id, scope, created_by from auth_token($1)`, [
    hash,
  ]);
