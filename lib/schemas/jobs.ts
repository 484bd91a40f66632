import { z } from 'zod';

const tenant = { organizationId: z.uuid() };

/** Payloads of the worker's queues: ids only, never content. */
export const JOB_PAYLOADS = {
  /** Reads an upload as far as it can: to a question about its columns, or into samples. */
  'import-upload': z.object({ ...tenant, uploadId: z.uuid() }),
  /** One slice of a plant's stale days; sends itself again while any are left. */
  'analyse-plant': z.object({ ...tenant, plantId: z.uuid() }),
  /** Evaluates one claimed (plant, local day) and mails its operators. */
  'daily-alert': z.object({ ...tenant, runId: z.uuid() }),
} as const;
export type JobName = keyof typeof JOB_PAYLOADS;
export type JobPayload<Name extends JobName> = z.infer<(typeof JOB_PAYLOADS)[Name]>;
