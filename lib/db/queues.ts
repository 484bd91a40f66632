/** The queues of the worker program. Created by the migrate step; the web side only sends. */
export const QUEUES = {
  'import-upload': {
    retryLimit: 3,
    retryDelay: 2,
    retryBackoff: true,
    expireInSeconds: 30,
    retentionMinutes: 60 * 24 * 14,
  },
  'analyse-plant': {
    retryLimit: 5,
    retryDelay: 2,
    retryBackoff: true,
    expireInSeconds: 30,
    retentionMinutes: 60 * 24 * 14,
  },
  'daily-alert': {
    // Some hours in all: an outage of the mail service shorter than a morning must not cost the operator's mail.
    retryLimit: 10,
    retryDelay: 30,
    retryBackoff: true,
    expireInSeconds: 30,
    retentionMinutes: 60 * 24 * 14,
  },
} as const;
export type QueueName = keyof typeof QUEUES;
export const QUEUE_NAMES = Object.keys(QUEUES) as QueueName[];
/** Notified in the enqueuing transaction, with the queue's name: an idle worker wakes at once. */
export const WAKE_CHANNEL = 'slackwater_jobs';
