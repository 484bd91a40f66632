import { randomUUID } from 'node:crypto';
import pg from 'pg';
import PgBoss from 'pg-boss';
import { enqueue } from '@/lib/db/enqueue';
import { query } from '@/lib/db/sql';
import { withoutTenant } from '@/lib/db/tenant';
import { log } from '@/lib/log';
import type { JobName } from '@/lib/schemas/jobs';
import type { JobDefinition } from './define-job';
import { QueueRunner } from './runner';
import { WakeUp } from './wake-up';

const ALIVE_MS = 10_000;
const TICK_MS = 60_000;
const MAINTENANCE_SECONDS = 5;

type AnyJob = { [Name in JobName]: JobDefinition<Name> }[JobName];

/** One worker process: a runner a queue, a sign of life, and a minute's tick that looks for due work in rows. */
export class WorkerProgram {
  private readonly id = randomUUID();
  private readonly pool: pg.Pool;
  private readonly boss: PgBoss;
  private readonly runners: {
    name: JobName;
    runner: Pick<QueueRunner<JobName>, 'start' | 'stop' | 'notify' | 'giveUpFailed'>;
  }[];
  private readonly wakeUp: WakeUp;
  private timers: NodeJS.Timeout[] = [];

  constructor(connectionString: string, jobs: readonly AnyJob[], options: { heartbeatMs?: number } = {}) {
    this.pool = new pg.Pool({ connectionString, max: 4 });
    // An idle connection that breaks is replaced at the next query; unheard, its error would end the process.
    this.pool.on('error', (error) => log.warn({ err: error }, 'pool.error'));
    this.boss = new PgBoss({
      db: { executeSql: (text: string, values: unknown[]) => this.pool.query(text, values) },
      migrate: false,
      schedule: false,
      supervise: true,
      maintenanceIntervalSeconds: MAINTENANCE_SECONDS,
    });
    this.boss.on('error', (error) => log.warn({ err: error }, 'queue.error'));
    this.runners = jobs.map((job) => ({
      name: job.name,
      runner: new QueueRunner(this.boss, this.pool, job as JobDefinition<JobName>, options.heartbeatMs),
    }));
    this.wakeUp = new WakeUp(connectionString, (queue) => {
      for (const each of this.runners) if (each.name === queue) each.runner.notify();
    });
  }

  async start(): Promise<void> {
    await this.boss.start();
    await this.wakeUp.start();
    for (const { runner } of this.runners) runner.start();
    await this.alive();
    this.timers = [setInterval(() => void this.alive(), ALIVE_MS), setInterval(() => void this.tick(), TICK_MS)];
    void this.tick();
    log.info({ workerId: this.id }, 'worker.started');
  }

  async stop(): Promise<void> {
    this.timers.forEach(clearInterval);
    await this.wakeUp.stop();
    await Promise.all(this.runners.map(({ runner }) => runner.stop()));
    await this.boss.stop({ graceful: false, close: false });
    await this.pool.query(`delete from worker_heartbeat where worker_id = $1`, [this.id]).catch(() => undefined);
    await this.pool.end();
    log.info({ workerId: this.id }, 'worker.stopped');
  }

  private async alive(): Promise<void> {
    try {
      await this.pool.query(
        `insert into worker_heartbeat (worker_id) values ($1) on conflict (worker_id) do update set seen_at = now()`,
        [this.id],
      );
    } catch (error) {
      log.warn({ err: error }, 'worker.heartbeat-failed');
    }
  }

  /** Once a minute in every worker: each step is safe to run anywhere and twice. */
  private async tick(): Promise<void> {
    try {
      await this.pool.query(`delete from worker_heartbeat where seen_at < now() - interval '1 day'`);
      await withoutTenant(async (em) => {
        const ended = await query<{ upload_id: string }>(em, `select upload_id from end_abandoned_uploads()`);
        if (ended.length > 0) log.info({ uploads: ended.length }, 'upload.abandoned');
      });
      await withoutTenant(async (em) => {
        const due = await query<{ run_id: string; organization_id: string }>(
          em,
          `select run_id, organization_id from claim_due_alerts(now(), 500)`,
        );
        for (const run of due)
          await enqueue(em, 'daily-alert', { organizationId: run.organization_id, runId: run.run_id });
      });
      for (const { runner } of this.runners) await runner.giveUpFailed();
    } catch (error) {
      log.warn({ err: error }, 'worker.tick-failed');
    }
  }
}
