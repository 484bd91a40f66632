import type { EntityManager } from '@mikro-orm/postgresql';
import type { ClientBase, QueryResultRow } from 'pg';

/**
 * The PostgreSQL connection of the entity manager's transaction: for arrays, COPY and ranked queries, which do not go through
 * entities. Throws outside a transaction, because only inside one is the tenant set.
 */
export async function transactionClient(em: EntityManager): Promise<ClientBase> {
  const context = em.getTransactionContext<unknown>();
  if (!context) throw new Error('This query needs a transaction: call it inside withTenant().');
  // In a transaction knex answers with the one connection the transaction holds.
  const { client } = context as { client: { acquireConnection(): Promise<ClientBase> } };
  return client.acquireConnection();
}

/** Runs SQL with `$1` parameters in the transaction of `em`; instants and dates come back as PostgreSQL's text. */
export async function query<Row extends QueryResultRow>(
  em: EntityManager,
  text: string,
  values: readonly unknown[] = [],
): Promise<Row[]> {
  const client = await transactionClient(em);
  return (await client.query<Row>(text, [...values])).rows;
}

/** The first row or null. */
export async function queryOne<Row extends QueryResultRow>(
  em: EntityManager,
  text: string,
  values: readonly unknown[] = [],
): Promise<Row | null> {
  return (await query<Row>(em, text, values))[0] ?? null;
}

/** PostgreSQL's text of a timestamptz (`2026-12-01 06:00:00+00`) as ISO 8601 in UTC; null stays null. */
export function isoInstant(text: string): string;
export function isoInstant(text: string | null): string | null;
export function isoInstant(text: string | null): string | null {
  if (text === null) return null;
  const iso = text.replace(' ', 'T').replace(/([+-]\d\d)$/, '$1:00');
  return new Date(iso).toISOString();
}
