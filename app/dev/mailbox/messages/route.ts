import { withoutTenant } from '@/lib/db/tenant';
import { deleteMails, listMails } from '@/lib/mail/dev-mail-store';
import { localFakes, noSuchPage } from '@/lib/mail/local-fakes';

/** GET: the mailbox as JSON, newest first; `/dev/mailbox?format=json` is rewritten to here. */
export async function GET(): Promise<Response> {
  if (!localFakes()) return noSuchPage();
  const mails = await withoutTenant(listMails);
  const items = mails.map(({ id, from, to, subject, text, html, headers, createdAt }) => ({
    id,
    to,
    subject,
    text,
    html,
    headers: { From: from, ...headers },
    createdAt,
  }));
  return Response.json(items, { headers: { 'cache-control': 'no-store' } });
}

/** DELETE: empties the mailbox. */
export async function DELETE(): Promise<Response> {
  if (!localFakes()) return noSuchPage();
  await withoutTenant(deleteMails);
  return new Response(null, { status: 204 });
}
