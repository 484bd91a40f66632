import type { EntityManager } from '@mikro-orm/postgresql';
import type { JobName, JobPayload } from '@/lib/schemas/jobs';

export interface JobContext {
  jobId: string;
  /** Aborted when another worker has taken the job or this one is shutting down: stop at the next safe place. */
  signal: AbortSignal;
  /** Throws when the job is no longer this attempt's; holds it until the transaction ends. Call it before every write. */
  fence(em: EntityManager): Promise<void>;
  /** Fences and completes the job in the transaction of its last write. */
  complete(em: EntityManager): Promise<void>;
}

export interface JobDefinition<Name extends JobName> {
  name: Name;
  /** Safe to run twice, and twice at once. Returning without `complete` completes the job. */
  run(context: JobContext, payload: JobPayload<Name>): Promise<void>;
  /** Called once when no attempt is left: says in the product's own tables, in words, that it failed. */
  giveUp(em: EntityManager, payload: JobPayload<Name>, message: string): Promise<void>;
}

export function defineJob<Name extends JobName>(definition: JobDefinition<Name>): JobDefinition<Name> {
  return definition;
}

/** A failure that trying again cannot mend; `message` is a sentence for the person who waits. */
export class PermanentFailure extends Error {
  override readonly name = 'PermanentFailure';
}

/** The job has been taken by another attempt: whatever was computed here is void. */
export class JobLost extends Error {
  override readonly name = 'JobLost';
}
