import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { Button } from '@/components/ui/button';
import { openLink, type LinkParams } from '../../link';
import { LINK_METADATA, LinkFrame } from '../../link-frame';

export const metadata: Metadata = { ...LINK_METADATA, title: 'Stop these mails' };

/** Stopping asks once: the next reverse day would go unread. */
export default async function StopPage({ params }: LinkParams) {
  const link = await openLink({ params });
  if (!link) notFound();
  const { delivery, token } = link;
  const verb = delivery.stopped ? 'resume-mail' : 'stop-mail';
  return (
    <LinkFrame title={delivery.stopped ? 'No more mails go to you' : 'Stop the morning mails?'}>
      <p className="mb-4">
        {delivery.stopped
          ? 'Mails stopped for every plant you are an operator of. What happened still stands on the plants’ pages.'
          : 'Mails then stop for every plant you are an operator of: nobody tells you in the morning that one ran backwards. The other operators still get theirs.'}
      </p>
      <form method="post" action={`/a/${token}/${verb}`}>
        <Button variant={delivery.stopped ? 'normal' : 'primary'} type="submit" className="min-h-11 w-full">
          {delivery.stopped ? 'Send me mails again' : 'Stop these mails'}
        </Button>
      </form>
    </LinkFrame>
  );
}
