import { TriangleAlert } from 'lucide-react';
import type { ReactNode } from 'react';
import { CAUTION } from '@/lib/client/words';

/** The caution that closes whatever could be acted on; always open, never behind a link. */
export function Caution({
  title = 'Before anything is changed.',
  children = CAUTION,
}: {
  title?: string;
  children?: ReactNode;
}) {
  return (
    <p className="flex max-w-[92ch] gap-2.5 py-2.5">
      <TriangleAlert size={16} strokeWidth={1.5} aria-hidden="true" className="mt-0.5 shrink-0" />
      <span>
        <b>{title}</b> {children}
      </span>
    </p>
  );
}
