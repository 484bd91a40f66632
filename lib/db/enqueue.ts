import type { EntityManager } from '@mikro-orm/postgresql';
import PgBoss from 'pg-boss';
import type { JobName, JobPayload } from '../schemas/jobs';
import { WAKE_CHANNEL } from './queues';
import { transactionClient } from './sql';

// Used for its SQL only: it is never started and every call brings the connection of a transaction.
const sender = new PgBoss({
  db: { executeSql: () => Promise.reject(new Error('enqueue() works inside a transaction only.')) },
  supervise: false,
  schedule: false,
});

/**
 * Enqueues a job in the transaction of `em`, so that work and the reason for it are committed together, and wakes an idle
 * worker at commit. `afterSeconds` delays the start.
 */
export async function enqueue<Name extends JobName>(
  em: EntityManager,
  queue: Name,
  payload: JobPayload<Name>,
  afterSeconds = 0,
): Promise<void> {
  const client = await transactionClient(em);
  const id = await sender.send(queue, payload, {
    startAfter: afterSeconds,
    db: { executeSql: (text: string, values: unknown[]) => client.query(text, values) },
  });
  if (id === null) throw new Error(`The queue "${queue}" does not exist: run the migrate step.`);
  await client.query(`select pg_notify($1, $2)`, [WAKE_CHANNEL, queue]);
}
