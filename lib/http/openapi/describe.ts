import type { z } from 'zod';

export interface Answer {
  description: string;
  /** Of the JSON body. */
  schema?: z.ZodType;
  /** Bodies of other media types, by type; an empty record means no body. */
  content?: Record<string, { schema: z.ZodType }>;
}

/** One method of one route, for the published document. Schemas are the very ones the route validates with. */
export interface Operation {
  tag: string;
  method: 'get' | 'post' | 'put' | 'patch' | 'delete';
  /** Below /api/v1, such as `/plants/{plantId}`. */
  path: string;
  summary: string;
  /** Who may: words of roles and scopes. */
  who: string;
  /** Nobody need be signed in. */
  open?: boolean;
  params?: z.ZodObject;
  query?: z.ZodObject;
  body?: z.ZodType;
  /** Bodies of other media types than JSON. */
  bodyContent?: Record<string, { schema: z.ZodType }>;
  /** Honours Idempotency-Key. */
  idempotent?: boolean;
  /** Answers an If-None-Match with 304 when nothing has changed. */
  conditional?: boolean;
  answers: Record<number, Answer>;
  /** Refusals beyond the usual ones of validation, sign-in and role. */
  refusals?: readonly number[];
}

/** Gives a schema its name in the document. The schema itself is left as it is. */
export const named = <Schema extends z.ZodType>(id: string, schema: Schema): Schema => schema.meta({ id });
