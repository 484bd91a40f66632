import { createHash } from 'node:crypto';
import type { EntityManager } from '@mikro-orm/postgresql';
import { query, queryOne } from '../db/sql';
import type { Role } from '../schemas/common';

/** The demo's organizations are known by ids of their own: a name can be anybody's. */
export function demoOrganizationId(key: string): string {
  const hex = createHash('sha256').update(`slackwater demo organization ${key}`).digest('hex');
  return `${hex.slice(0, 8)}-${hex.slice(8, 12)}-4${hex.slice(13, 16)}-8${hex.slice(17, 20)}-${hex.slice(20, 32)}`;
}

interface Person {
  email: string;
  name: string;
  memberships: readonly { organization: string; role: Role }[];
}

/**
 * Organizations and people of the demo, made where they are missing. Runs as the database's owner: the sign-up door gives one
 * organization and the role of its owner, and the demo has more than that. Returns each organization's id by key.
 */
export async function ensureDemoAccounts(
  em: EntityManager,
  demo: { organizations: readonly { key: string; name: string }[]; users: readonly Person[] },
  passwordHash: string,
): Promise<Map<string, string>> {
  const ids = new Map<string, string>();
  for (const { key, name } of demo.organizations) {
    const id = demoOrganizationId(key);
    await query(em, `insert into organization (id, name) values ($1, $2) on conflict (id) do nothing`, [id, name]);
    ids.set(key, id);
  }
  for (const person of demo.users) {
    const user = await queryOne<{ id: string }>(
      em,
      `insert into app_user (email, name, password_hash) values ($1, $2, $3)
       on conflict (email) do update set name = excluded.name returning id`,
      [person.email, person.name, passwordHash],
    );
    for (const { organization, role } of person.memberships) {
      await query(
        em,
        `insert into membership (organization_id, user_id, role) values ($1, $2, $3) on conflict do nothing`,
        [ids.get(organization), user?.id, role],
      );
    }
  }
  return ids;
}
