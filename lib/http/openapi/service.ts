import { z } from 'zod';
import { Liveness, Readiness } from '../../schemas/health';
import type { Operation } from './describe';

const common = { tag: 'Service', method: 'get', who: 'anyone', open: true } as const;

export const SERVICE_OPERATIONS: readonly Operation[] = [
  {
    ...common,
    path: '/health/live',
    summary: 'This process answers.',
    answers: { 200: { description: 'Alive.', schema: Liveness } },
  },
  {
    ...common,
    path: '/health/ready',
    summary: 'Whether requests can be served and their jobs done.',
    answers: {
      200: { description: 'Ready.', schema: Readiness },
      503: { description: 'Not ready; the body says what is missing.', schema: Readiness },
    },
  },
  {
    ...common,
    method: 'post',
    path: '/webhooks/resend',
    summary: 'Calls of the mail service: bounces and complaints stop further mail to that address.',
    who: 'the mail service, by its signature',
    body: z.looseObject({ type: z.string() }),
    answers: { 200: { description: 'Taken.', schema: z.object({ received: z.literal(true) }) } },
    refusals: [401, 503],
  },
  {
    ...common,
    path: '/openapi.json',
    summary: 'This document.',
    answers: { 200: { description: 'OpenAPI 3.1.', schema: z.record(z.string(), z.unknown()) } },
  },
];
