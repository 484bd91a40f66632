import type { z } from 'zod';
import { notFound, problem, type FieldError } from './problem';

/** JSON bodies are settings and choices, never files. */
const MAX_JSON_BYTES = 1024 * 1024;

const fieldErrors = (error: z.ZodError): FieldError[] =>
  error.issues.map((issue) => ({ path: issue.path.map(String).join('.'), message: issue.message }));

/** The value by its schema; what does not fit is a 400 problem with a sentence for each field. */
export function parsedInput<Schema extends z.ZodType>(schema: Schema, value: unknown, what: string): z.output<Schema> {
  const result = schema.safeParse(value);
  if (result.success) return result.data;
  const errors = fieldErrors(result.error);
  throw problem(400, 'Invalid input', `The ${what} is not right: ${errors[0]?.message ?? 'see errors'}`, errors);
}

/** Path parameters that cannot name anything are answered like those that name nothing. */
export function parseParams<Schema extends z.ZodType>(schema: Schema, params: unknown): z.output<Schema> {
  const result = schema.safeParse(params);
  if (!result.success) throw notFound('object');
  return result.data;
}

export function parseQuery<Schema extends z.ZodType>(schema: Schema, request: Request): z.output<Schema> {
  const query: Record<string, string> = {};
  // A key without a value (`?cause=`) counts as absent, which is what forms send for "any".
  for (const [key, value] of new URL(request.url).searchParams) if (value !== '') query[key] = value;
  return parsedInput(schema, query, 'query');
}

export async function parseBody<Schema extends z.ZodType>(schema: Schema, request: Request): Promise<z.output<Schema>> {
  const text = await readText(request);
  if (text === '') return parsedInput(schema, {}, 'body');
  if (!/^application\/([\w.+-]+\+)?json\b/i.test(request.headers.get('content-type') ?? '')) {
    throw problem(415, 'Unsupported media type', 'Send the body as application/json.');
  }
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch {
    throw problem(400, 'Invalid input', 'The body is not JSON.', [{ path: '', message: 'The body is not JSON.' }]);
  }
  return parsedInput(schema, value, 'body');
}

async function readText(request: Request): Promise<string> {
  const tooLarge = () => problem(413, 'Content too large', 'The body is larger than 1 MiB.');
  if (Number(request.headers.get('content-length') ?? 0) > MAX_JSON_BYTES) throw tooLarge();
  if (!request.body) return '';
  const decoder = new TextDecoder();
  let text = '';
  let bytes = 0;
  for await (const chunk of request.body as unknown as AsyncIterable<Uint8Array>) {
    bytes += chunk.byteLength;
    if (bytes > MAX_JSON_BYTES) throw tooLarge();
    text += decoder.decode(chunk, { stream: true });
  }
  return text + decoder.decode();
}
