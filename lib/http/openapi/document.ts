import { OpenAPIRegistry, OpenApiGeneratorV31, type RouteConfig } from '@asteasolutions/zod-to-openapi';
import { z } from 'zod';
import { Problem } from '../../schemas/common';
import { ACCOUNT_OPERATIONS } from './account';
import { DATA_OPERATIONS, UPLOAD_OPERATIONS } from './data';
import { named, type Answer, type Operation } from './describe';
import { PLANT_OPERATIONS } from './plants';
import { SERVICE_OPERATIONS } from './service';

/** Every operation of the API, subject by subject. */
export const OPERATIONS: readonly Operation[] = [
  ...ACCOUNT_OPERATIONS,
  ...PLANT_OPERATIONS,
  ...UPLOAD_OPERATIONS,
  ...DATA_OPERATIONS,
  ...SERVICE_OPERATIONS,
];

const REFUSALS: Readonly<Record<number, string>> = {
  400: 'The input is not right; `errors` says where.',
  401: 'Not signed in.',
  403: 'Your role or scope may not do this, or the request comes from another site.',
  404: 'No such object, or it is another organization’s.',
  409: 'In the way of something else; the detail says of what.',
  410: 'It has ended, and nothing of it is kept.',
  412: 'The request names no version of the protocol, or one that is not spoken here.',
  413: 'Larger than the limit.',
  415: 'A media type that is not taken here.',
  422: 'The Idempotency-Key was used with another body.',
  429: 'Too many tries; Retry-After says when.',
  503: 'Not available, or not set up.',
};

const ProblemDocument = named('Problem', Problem);

function refusalCodes(operation: Operation): number[] {
  const codes = new Set(operation.refusals ?? []);
  if (operation.query || operation.body || operation.bodyContent) codes.add(400);
  if (operation.body || operation.bodyContent) codes.add(413).add(415);
  if (operation.params) codes.add(404);
  if (!operation.open) codes.add(401).add(403);
  if (operation.idempotent && !operation.open) codes.add(409).add(422);
  return [...codes].sort((a, b) => a - b);
}

function answerContent(answer: Answer): RouteConfig['responses'][string] {
  const content = answer.content ?? (answer.schema ? { 'application/json': { schema: answer.schema } } : undefined);
  return { description: answer.description, ...(content ? { content } : {}) };
}

function configOf(operation: Operation): RouteConfig {
  const content = {
    ...(operation.body ? { 'application/json': { schema: operation.body } } : {}),
    ...operation.bodyContent,
  };
  const headers = {
    ...(operation.idempotent ? { 'Idempotency-Key': z.string().max(255).optional() } : {}),
    ...(operation.conditional ? { 'If-None-Match': z.string().optional() } : {}),
  };
  const responses: Partial<Record<string, RouteConfig['responses'][string]>> = {};
  for (const [status, answer] of Object.entries(operation.answers)) responses[status] = answerContent(answer);
  if (operation.conditional) responses[304] = { description: 'Nothing has changed since the tag that was sent.' };
  for (const status of refusalCodes(operation)) {
    responses[status] ??= {
      description: REFUSALS[status] ?? 'Refused.',
      content: { 'application/problem+json': { schema: ProblemDocument } },
    };
  }
  return {
    method: operation.method,
    path: `/api/v1${operation.path}`,
    tags: [operation.tag],
    summary: operation.summary,
    description: `Who: ${operation.who}.`,
    security: operation.open ? [] : [{ session: [] }, { token: [] }],
    request: {
      ...(operation.params ? { params: operation.params } : {}),
      ...(operation.query ? { query: operation.query } : {}),
      ...(Object.keys(headers).length > 0 ? { headers: z.object(headers) } : {}),
      ...(Object.keys(content).length > 0 ? { body: { content } } : {}),
    },
    responses: responses as RouteConfig['responses'],
  };
}

/** The OpenAPI 3.1 document of the API, made from the schemas that validate its requests. */
export function openApiDocument(sessionCookieName: string): object {
  const registry = new OpenAPIRegistry();
  registry.registerComponent('securitySchemes', 'session', { type: 'apiKey', in: 'cookie', name: sessionCookieName });
  registry.registerComponent('securitySchemes', 'token', { type: 'http', scheme: 'bearer' });
  for (const operation of OPERATIONS) registry.registerPath(configOf(operation));
  return new OpenApiGeneratorV31(registry.definitions).generateDocument({
    openapi: '3.1.0',
    info: {
      title: 'Slackwater',
      version: '1',
      description:
        'Low delta-T in chilled-water plants. Names carry units; `?units=si` answers in SI and the names change with it. Bypass flow is positive forward (production water crosses over), negative in reverse. Every number is an estimate for review by the plant’s operator and a licensed engineer.',
    },
  });
}
