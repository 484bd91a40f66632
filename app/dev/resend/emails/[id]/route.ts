import { z } from 'zod';
import { withoutTenant } from '@/lib/db/tenant';
import { findMail } from '@/lib/mail/dev-mail-store';
import { localFakes, noSuchPage } from '@/lib/mail/local-fakes';
import { keyRefusal, refusal } from '../../answers';

/** GET: the fake's `GET /emails/{id}`. Everything that was kept counts as delivered. */
export async function GET(request: Request, { params }: { params: Promise<{ id: string }> }): Promise<Response> {
  if (!localFakes()) return noSuchPage();
  const refused = keyRefusal(request.headers);
  if (refused) return refused;
  const id = z.uuid().safeParse((await params).id);
  const mail = id.success ? await withoutTenant((em) => findMail(em, id.data)) : null;
  if (!mail) return refusal(404, 'not_found', 'Email not found');
  return Response.json({
    object: 'email',
    id: mail.id,
    to: mail.to,
    from: mail.from,
    created_at: mail.createdAt,
    subject: mail.subject,
    html: mail.html,
    text: mail.text,
    bcc: [],
    cc: [],
    reply_to: [],
    last_event: 'delivered',
    scheduled_at: null,
  });
}
