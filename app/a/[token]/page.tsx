import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { openLink, stateOf } from '../link';
import { LINK_METADATA, LinkFrame } from '../link-frame';
import { Acknowledgement } from './acknowledgement';

export const metadata: Metadata = { ...LINK_METADATA, title: 'Acknowledge' };

interface PageProps {
  params: Promise<{ token: string }>;
  searchParams: Promise<{ undone?: string | string[] }>;
}

/**
 * Where the mail's button leads. Opening it changes nothing, because mail scanners follow links: its script posts at once, and
 * without script there is one button.
 */
export default async function AcknowledgePage({ params, searchParams }: PageProps) {
  const [link, { undone }] = await Promise.all([openLink({ params }), searchParams]);
  if (!link) notFound();
  const { delivery, token } = link;
  return (
    <LinkFrame over="The morning mail" title={delivery.subject}>
      <Acknowledgement path={`/a/${token}`} state={stateOf(delivery)} atOnce={undone === undefined} />
    </LinkFrame>
  );
}
