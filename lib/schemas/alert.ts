import { z } from 'zod';
import { LocalDay } from './common';

export const AlertRule = z.object({
  enabled: z.boolean().default(true),
  /** Send when yesterday had at least this many minutes of reverse flow... */
  minReverseMinutes: z.number().int().min(1).max(1440).default(30),
  /** ...and the largest of it was at least this much. */
  minReverseFlowGpm: z.number().min(0).max(1_000_000).default(0),
  /** Local time of the plant, HH:MM. */
  sendAt: z
    .string()
    .regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'Give the time as HH:MM, 24 hours.')
    .default('06:30'),
});
export type AlertRule = z.infer<typeof AlertRule>;

export const DELIVERY_STATUSES = ['pending', 'sent', 'failed', 'suppressed'] as const;
export const AlertDelivery = z.object({
  id: z.uuid(),
  day: LocalDay,
  email: z.string(),
  status: z.enum(DELIVERY_STATUSES),
  subject: z.string(),
  sentAt: z.string().nullable(),
  failure: z.string().nullable(),
  acknowledgedAt: z.string().nullable(),
  acknowledgedBy: z.string().nullable(),
});
export const ALERT_OUTCOMES = [
  'pending',
  'sent',
  'nothing-to-report',
  'no-data',
  'no-recipients',
  'already-sent',
  'disabled',
  'failed',
] as const;
export const AlertRun = z.object({
  id: z.uuid(),
  day: LocalDay,
  outcome: z.enum(ALERT_OUTCOMES),
  detail: z.string(),
  createdAt: z.string(),
});
export const Alerts = z.object({
  rule: AlertRule,
  runs: z.array(AlertRun),
  deliveries: z.array(AlertDelivery),
  recipients: z.array(z.object({ name: z.string(), email: z.string() })),
});
export type Alerts = z.infer<typeof Alerts>;
export const RunAlert = z.object({ day: LocalDay });

export const ANALYSIS_STATUSES = ['queued', 'running', 'done', 'failed'] as const;
export const Analysis = z.object({
  id: z.uuid(),
  status: z.enum(ANALYSIS_STATUSES),
  progress: z.number(),
  from: z.string().nullable(),
  to: z.string().nullable(),
  kernelVersion: z.string(),
  settingsRevision: z.number().int(),
  failure: z.string().nullable(),
  createdAt: z.string(),
  finishedAt: z.string().nullable(),
});
