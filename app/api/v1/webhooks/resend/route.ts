import { problem, route } from '@/lib/http/route';
import { log } from '@/lib/log';
import { suppressAddress } from '@/lib/mail/suppression';
import { suppressionsOf, verifiedEvent } from '@/lib/mail/webhook-event';

/** Far more than any event; a body without an end is not read to its end. */
const MAX_BODY_BYTES = 256 * 1024;

/** POST: what the mail service tells of a mail. Bounces and complaints stop further mail to that address. */
export const POST = route({ public: true, transaction: false }, async ({ request, requestId }) => {
  const secret = process.env.RESEND_WEBHOOK_SECRET;
  if (secret === undefined || secret === '')
    throw problem(503, 'Not set up', 'Calls of the mail service are not taken: RESEND_WEBHOOK_SECRET is not set.');
  const event = verifiedEvent(await readText(request), request.headers, secret);
  if (!event) throw problem(401, 'Not verified', 'The signature of this call is missing, wrong or too old.');
  for (const suppression of suppressionsOf(event)) {
    const known = await suppressAddress(suppression);
    log.info({ event: 'mail.suppressed', requestId, kind: event.type, providerId: suppression.providerId, known });
  }
  return { received: true };
});

async function readText(request: Request): Promise<string> {
  const tooLarge = problem(413, 'Too large', `A call may have at most ${MAX_BODY_BYTES} bytes.`);
  if (Number(request.headers.get('content-length') ?? 0) > MAX_BODY_BYTES) throw tooLarge;
  if (!request.body) return '';
  const parts: Uint8Array[] = [];
  let bytes = 0;
  for await (const part of request.body) {
    bytes += part.byteLength;
    if (bytes > MAX_BODY_BYTES) throw tooLarge;
    parts.push(part);
  }
  return Buffer.concat(parts).toString('utf8');
}
