import { pendingMigrations } from '../db/boot-check';
import { queryOne } from '../db/sql';
import { withoutTenant } from '../db/tenant';
import { log } from '../log';
import type { Readiness } from '../schemas/health';

/** A worker that is alive writes its row more often than this. */
const WORKER_SILENCE_SECONDS = 60;

/** Whether requests can be served and their jobs done. Never throws: not ready is an answer. */
export async function readiness(): Promise<Readiness> {
  try {
    const missing = await pendingMigrations();
    const worker = await withoutTenant((em) =>
      queryOne(em, `select 1 from worker_heartbeat where seen_at > now() - $1 * interval '1 second' limit 1`, [
        WORKER_SILENCE_SECONDS,
      ]),
    );
    const parts = {
      database: 'ok',
      migrations: missing.length === 0 ? 'current' : 'pending',
      worker: worker ? 'ok' : 'absent',
    } as const;
    return { status: missing.length === 0 && worker ? 'ready' : 'not-ready', ...parts };
  } catch (err) {
    log.warn({ err }, 'readiness.failed');
    return { status: 'not-ready', database: 'absent', migrations: 'unknown', worker: 'unknown' };
  }
}
