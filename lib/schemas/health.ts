import { z } from 'zod';

export const Liveness = z.object({ status: z.literal('live') });
export const Readiness = z.object({
  status: z.enum(['ready', 'not-ready']),
  database: z.enum(['ok', 'absent']),
  migrations: z.enum(['current', 'pending', 'unknown']),
  /** A worker has given a sign of life in the last minute. */
  worker: z.enum(['ok', 'absent', 'unknown']),
});
export type Readiness = z.infer<typeof Readiness>;
