import type { EntityManager } from '@mikro-orm/postgresql';
import { orm } from './orm';
import { transactionClient } from './sql';

/** Whose rows a transaction may see: the organizations of the person, token or job that asks. */
export interface Tenancy {
  organizationIds: readonly string[];
}

/**
 * The one door to tenant data: a transaction in which row-level security admits the rows of `organizationIds` and no others.
 * Queries inside are awaited in turn (one connection). Nothing slow belongs in it.
 */
export async function withTenant<Result>(
  tenancy: Tenancy,
  work: (em: EntityManager) => Promise<Result>,
): Promise<Result> {
  const { em } = await orm();
  return em.fork().transactional(async (inner) => {
    const client = await transactionClient(inner);
    // Local to the transaction: the next borrower of this connection starts with no tenant.
    await client.query(`select set_config('app.orgs', $1, true)`, [`{${tenancy.organizationIds.join(',')}}`]);
    return work(inner);
  });
}

/** A transaction before any tenant is known: it reaches only the narrow functions made for that, and tables without tenants. */
export async function withoutTenant<Result>(work: (em: EntityManager) => Promise<Result>): Promise<Result> {
  return withTenant({ organizationIds: [] }, work);
}
