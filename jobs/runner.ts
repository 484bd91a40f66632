import { setTimeout as pause } from 'node:timers/promises';
import type { EntityManager } from '@mikro-orm/postgresql';
import type PgBoss from 'pg-boss';
import type { Pool } from 'pg';
import { log } from '@/lib/log';
import { JOB_PAYLOADS, type JobName, type JobPayload } from '@/lib/schemas/jobs';
import { transactionClient } from '@/lib/db/sql';
import { withTenant } from '@/lib/db/tenant';
import { JobLost, PermanentFailure, type JobContext, type JobDefinition } from './define-job';

const HEARTBEAT_MS = 8_000;
const POLL_MS = 2_000;
/** Finds and holds a job while it belongs to one attempt. */
const HELD = `select 1 from pgboss.job where name = $1 and id = $2 and state = 'active' and retry_count = $3 for update`;

/** The queue runner: one job at a time from one queue. pg-boss keeps the rows; heartbeat, fence and wake-up are here. */
export class QueueRunner<Name extends JobName> {
  private readonly stopping = new AbortController();
  private wake: () => void = () => undefined;
  /** A notification that came while no one waited: the next wait ends at once. */
  private notified = false;
  private loop: Promise<void> | null = null;

  constructor(
    private readonly boss: PgBoss,
    private readonly pool: Pool,
    private readonly definition: JobDefinition<Name>,
    private readonly heartbeatMs = HEARTBEAT_MS,
  ) {}

  start(): void {
    this.loop ??= this.run();
  }

  /** Ends the wait of an idle loop: called when PostgreSQL notifies of a new job. */
  notify(): void {
    this.notified = true;
    this.wake();
  }

  /** Hands a running job back, unharmed, and ends the loop. */
  async stop(): Promise<void> {
    this.stopping.abort();
    this.wake();
    await this.loop;
  }

  private async run(): Promise<void> {
    while (!this.stopping.signal.aborted) {
      try {
        const [job] = await this.boss.fetch<object>(this.definition.name, { includeMetadata: true });
        if (job) await this.attempt(job);
        else await this.idle();
      } catch (error) {
        // The database is away, or a bookkeeping query failed: the job's expiry will bring it back.
        log.error({ queue: this.definition.name, err: error }, 'job.loop-failed');
        await pause(POLL_MS);
      }
    }
  }

  private async idle(): Promise<void> {
    await new Promise<void>((resolve) => {
      if (this.notified || this.stopping.signal.aborted) return resolve();
      const timer = setTimeout(resolve, POLL_MS);
      this.wake = () => {
        clearTimeout(timer);
        resolve();
      };
    });
    this.wake = () => undefined;
    this.notified = false;
  }

  private async attempt(job: PgBoss.JobWithMetadata<object>): Promise<void> {
    const startedAt = Date.now();
    const lost = new AbortController();
    const signal = AbortSignal.any([lost.signal, this.stopping.signal]);
    const progress = { completed: false };
    const fence = async (em: EntityManager): Promise<void> => {
      const client = await transactionClient(em);
      const held = await client.query(HELD, [job.name, job.id, job.retryCount]);
      if (held.rowCount === 0) throw new JobLost(`${job.name} ${job.id}`);
    };
    const complete = async (em: EntityManager): Promise<void> => {
      await fence(em);
      const client = await transactionClient(em);
      await this.boss.complete(
        job.name,
        job.id,
        {},
        { db: { executeSql: (text: string, values: unknown[]) => client.query(text, values) } },
      );
      progress.completed = true;
    };
    const context: JobContext = { jobId: job.id, signal, fence, complete };
    const heartbeat = setInterval(() => void this.beat(job, lost), this.heartbeatMs);
    try {
      const payload = JOB_PAYLOADS[this.definition.name].parse(job.data) as JobPayload<Name>;
      await this.definition.run(context, payload);
      if (!progress.completed) await this.settleFenced(job, (db) => this.boss.complete(job.name, job.id, {}, { db }));
      const fields: Record<string, unknown> = { ...payload, queue: job.name, jobId: job.id, attempt: job.retryCount };
      log.info({ ...fields, durationMs: Date.now() - startedAt }, 'job.done');
    } catch (error) {
      await this.settle(job, error, startedAt);
    } finally {
      clearInterval(heartbeat);
    }
  }

  /** Moves the job's start forward so that it does not expire; no row means that another attempt owns it. */
  private async beat(job: PgBoss.JobWithMetadata<object>, lost: AbortController): Promise<void> {
    try {
      const held = await this.pool.query(
        `update pgboss.job set started_on = now() where name = $1 and id = $2 and state = 'active' and retry_count = $3`,
        [job.name, job.id, job.retryCount],
      );
      if (held.rowCount === 0) lost.abort(new JobLost(`${job.name} ${job.id}`));
    } catch (error) {
      log.warn({ queue: job.name, jobId: job.id, err: error }, 'job.heartbeat-failed');
    }
  }

  private async settle(job: PgBoss.JobWithMetadata<object>, error: unknown, startedAt: number): Promise<void> {
    const fields = { queue: job.name, jobId: job.id, attempt: job.retryCount, durationMs: Date.now() - startedAt };
    if (error instanceof JobLost) {
      log.warn({ ...fields }, 'job.lost');
      return;
    }
    const message = error instanceof Error ? error.message : String(error);
    if (this.stopping.signal.aborted && !(error instanceof PermanentFailure)) {
      // Shutting down costs the job no attempt: without a start it is fetched again under the same count.
      await this.pool.query(
        `update pgboss.job set state = 'retry', started_on = null, start_after = now()
         where name = $1 and id = $2 and state = 'active' and retry_count = $3`,
        [job.name, job.id, job.retryCount],
      );
      log.info({ ...fields }, 'job.handed-back');
      return;
    }
    log.error({ ...fields, err: error }, 'job.failed');
    await this.settleFenced(job, async (db) => {
      if (error instanceof PermanentFailure) {
        await db.executeSql(`update pgboss.job set retry_limit = retry_count where name = $1 and id = $2`, [
          job.name,
          job.id,
        ]);
      }
      await this.boss.fail(job.name, job.id, { message, permanent: error instanceof PermanentFailure }, { db });
    });
    await this.giveUpFailed();
  }

  /** Ends a job only while it is this attempt's: pg-boss itself would end another's. */
  private async settleFenced(
    job: PgBoss.JobWithMetadata<object>,
    settle: (db: PgBoss.Db) => Promise<unknown>,
  ): Promise<void> {
    const client = await this.pool.connect();
    try {
      await client.query('begin');
      const held = await client.query(HELD, [job.name, job.id, job.retryCount]);
      if (held.rowCount !== 0)
        await settle({ executeSql: (text: string, values: unknown[]) => client.query(text, values) });
      await client.query('commit');
    } catch (error) {
      await client.query('rollback').catch(() => undefined);
      throw error;
    } finally {
      client.release();
    }
  }

  /**
   * Tells the product of jobs that have no attempt left, whether they threw or their worker died. Called after a failure and
   * by the worker's minute, so that none stays silent.
   */
  async giveUpFailed(): Promise<void> {
    const { rows } = await this.pool.query<{
      id: string;
      data: object;
      output: { message?: string; permanent?: boolean } | null;
    }>(
      `select id, data, output from pgboss.job where name = $1 and state = 'failed' and not coalesce(output ? 'told', false) limit 50`,
      [this.definition.name],
    );
    for (const row of rows) {
      const parsed = JOB_PAYLOADS[this.definition.name].safeParse(row.data);
      const words =
        row.output?.permanent === true && row.output.message !== undefined
          ? row.output.message
          : 'This did not work after several tries. Try again; if it fails again, tell the person who runs this service.';
      if (parsed.success) {
        const payload = parsed.data as JobPayload<Name>;
        await withTenant({ organizationIds: [payload.organizationId] }, async (em) => {
          const client = await transactionClient(em);
          const mine = await client.query(
            `select 1 from pgboss.job where name = $1 and id = $2 and not coalesce(output ? 'told', false) for update skip locked`,
            [this.definition.name, row.id],
          );
          if (mine.rowCount === 0) return;
          await this.definition.giveUp(em, payload, words);
          await client.query(
            `update pgboss.job set output = coalesce(output, '{}') || '{"told": true}' where name = $1 and id = $2`,
            [this.definition.name, row.id],
          );
        });
      }
    }
  }
}
