import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { Button } from '@/components/ui/button';
import { MAX_NOTE_CHARACTERS } from '@/lib/commands/acknowledge-delivery';
import { openLink, stateOf, type LinkParams } from '../../link';
import { LINK_METADATA, LinkFrame } from '../../link-frame';

export const metadata: Metadata = { ...LINK_METADATA, title: 'Acknowledge with a note' };

/** Acknowledging with words for the others: the note stands with the day's episodes. */
export default async function NotePage({ params }: LinkParams) {
  const link = await openLink({ params });
  if (!link) notFound();
  const { delivery, token } = link;
  const { acknowledgedAt } = stateOf(delivery);
  return (
    <LinkFrame over="The morning mail" title={delivery.subject}>
      {acknowledgedAt === null ? null : <p className="mb-4">Acknowledged, {acknowledgedAt}.</p>}
      <form method="post" action={`/a/${token}/acknowledge`}>
        <label htmlFor="note" className="mb-1 block font-semibold">
          What you saw or did
        </label>
        <textarea
          id="note"
          name="note"
          rows={5}
          required
          maxLength={MAX_NOTE_CHARACTERS}
          className="mb-4 block w-full rounded border border-ink-2 bg-sheet p-2.5"
        />
        <Button variant="primary" type="submit" className="min-h-11 w-full">
          {acknowledgedAt === null ? 'Acknowledge with this note' : 'Add this note'}
        </Button>
      </form>
    </LinkFrame>
  );
}
