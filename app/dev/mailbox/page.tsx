import type { Metadata } from 'next';
import { headers } from 'next/headers';
import Link from 'next/link';
import { notFound } from 'next/navigation';
import { EmptyState } from '@/components/ui/states';
import { withoutTenant } from '@/lib/db/tenant';
import { listMails } from '@/lib/mail/dev-mail-store';
import { localFakes } from '@/lib/mail/local-fakes';
import { cameAt } from './came-at';
import { OpenMail } from './open-mail';

export const metadata: Metadata = { title: 'Local mailbox', robots: { index: false } };

/** What the local fake of the mail service has been given, newest first; one mail open. */
export default async function MailboxPage({ searchParams }: { searchParams: Promise<{ mail?: string | string[] }> }) {
  if (!localFakes()) notFound();
  const [{ mail: wanted }, head, mails] = await Promise.all([searchParams, headers(), withoutTenant(listMails)]);
  const open = mails.find((mail) => mail.id === wanted) ?? mails[0];
  return (
    <div className="page pb-8">
      <p className="border-b border-ink py-2.5 font-serif text-[1.25rem] font-semibold">Slackwater</p>
      <main className="pt-5">
        <h1 className="mb-2 font-serif text-title font-medium">Local mailbox</h1>
        <p className="mb-5 font-serif text-lead">
          {mails.length === 0
            ? 'No mail yet.'
            : `${mails.length === 1 ? '1 mail' : `${mails.length} mails`}, kept on this machine and sent to nobody.`}
        </p>
        {open === undefined ? (
          <EmptyState claim="Nothing was sent.">
            Run a plant’s alert for a day that ran backwards; its mail lands here.
          </EmptyState>
        ) : (
          <div className="grid grid-cols-[340px_minmax(0,1fr)] gap-11 phone:grid-cols-1">
            <nav aria-label="Mails" className="border-t border-ink">
              <ol>
                {mails.map((mail) => (
                  <li key={mail.id} className={mail === open ? 'border-b border-rule bg-tint' : 'border-b border-rule'}>
                    <Link
                      href={`/dev/mailbox?mail=${mail.id}`}
                      aria-current={mail === open ? 'true' : undefined}
                      className="block px-2 py-2"
                    >
                      <span className="block text-small text-ink-2">
                        {mail.to.join(', ')} · {cameAt(mail)}
                      </span>
                      <span className={mail === open ? 'font-semibold' : ''}>{mail.subject}</span>
                    </Link>
                  </li>
                ))}
              </ol>
            </nav>
            <OpenMail mail={open} nonce={head.get('x-nonce') ?? undefined} />
          </div>
        )}
      </main>
    </div>
  );
}
