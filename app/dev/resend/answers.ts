import { z } from 'zod';

/** The service's documented errors, as far as the product can meet them: `{ statusCode, name, message }`. */
export function refusal(statusCode: number, name: string, message: string): Response {
  return Response.json({ statusCode, name, message }, { status: statusCode });
}

/** Checks the key as the service does; null when it is fine. Any key will do here. */
export function keyRefusal(headers: Headers): Response | null {
  const authorization = headers.get('authorization');
  if (authorization === null || authorization.trim() === '')
    return refusal(
      401,
      'missing_api_key',
      'Missing API key in the authorization header. Include the following header in the request: "Authorization: Bearer YOUR_API_KEY".',
    );
  return /^Bearer \S+$/.test(authorization) ? null : refusal(400, 'validation_error', 'API key is invalid');
}

const ADDRESS = /^[^<>@\s]+@[^<>@\s.]+\.[^<>@\s]+$|^[^<>]*<[^<>@\s]+@[^<>@\s.]+\.[^<>@\s]+>$/;
const address = (field: string) =>
  z
    .string({ error: `Missing \`${field}\` field.` })
    .regex(
      ADDRESS,
      `Invalid \`${field}\` field. The email address needs to follow the \`email@example.com\` or \`Name <email@example.com>\` format.`,
    );

/** A mail as the service takes it; unknown members are ignored. */
export const NewEmail = z
  .object({
    from: address('from'),
    to: z.preprocess(
      (value) => (typeof value === 'string' ? [value] : value),
      z
        .array(address('to'), { error: 'Missing `to` field.' })
        .min(1, 'Missing `to` field.')
        .max(50, 'At most 50 recipients.'),
    ),
    subject: z.string({ error: 'Missing `subject` field.' }).min(1, 'Missing `subject` field.'),
    html: z.string().default(''),
    text: z.string().default(''),
    headers: z.record(z.string(), z.string()).default({}),
  })
  .refine((mail) => mail.html !== '' || mail.text !== '', { error: 'Missing `html` or `text` field.' });
