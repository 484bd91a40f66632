import { withoutTenant } from '@/lib/db/tenant';
import { keepMail } from '@/lib/mail/dev-mail-store';
import { localFakes, noSuchPage } from '@/lib/mail/local-fakes';
import { keyRefusal, NewEmail, refusal } from '../answers';

const MAX_KEY_CHARACTERS = 256;

/** POST: the fake's `POST /emails`. Keeps the mail for the local mailbox; honours idempotency keys as the service does. */
export async function POST(request: Request): Promise<Response> {
  if (!localFakes()) return noSuchPage();
  const refused = keyRefusal(request.headers);
  if (refused) return refused;
  const key = request.headers.get('idempotency-key');
  if (key !== null && (key === '' || key.length > MAX_KEY_CHARACTERS))
    return refusal(400, 'invalid_idempotency_key', 'Idempotency keys must be between 1 and 256 characters.');
  const body: unknown = await request.json().catch(() => null);
  const mail = NewEmail.safeParse(body);
  if (!mail.success) {
    const message = mail.error.issues[0]?.message ?? 'The request body is not a mail.';
    return refusal(422, message.startsWith('Missing') ? 'missing_required_field' : 'validation_error', message);
  }
  const id = await withoutTenant((em) => keepMail(em, mail.data, key));
  if (id === null)
    return refusal(409, 'invalid_idempotent_request', 'Same idempotency key used with a different request payload.');
  return Response.json({ id });
}
