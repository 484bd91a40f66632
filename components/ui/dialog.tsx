'use client';
import { X } from 'lucide-react';
import { Dialog as Radix } from 'radix-ui';
import type { ReactNode } from 'react';

export interface DialogProps {
  open: boolean;
  onOpenChange: (open: boolean) => void;
  title: string;
  /** What this is about, said with the title to a reader who cannot see. */
  description?: ReactNode;
  children?: ReactNode;
  /** Buttons, the one that acts last. */
  footer?: ReactNode;
}

/** A question over the page. Esc and the close button dismiss it; focus returns to where it was. */
export function Dialog({ open, onOpenChange, title, description, children, footer }: DialogProps) {
  return (
    <Radix.Root open={open} onOpenChange={onOpenChange}>
      <Radix.Portal>
        {/* No shade and no blur over the page: a frame of ink is enough, and print-like. */}
        <Radix.Overlay className="fixed inset-0 z-40" />
        <Radix.Content
          className="fixed top-1/2 left-1/2 z-50 max-h-[90dvh] w-[calc(100vw-32px)] max-w-130 -translate-x-1/2 -translate-y-1/2 overflow-y-auto border border-ink bg-paper p-6 text-ink phone:p-4"
          {...(description === undefined ? { 'aria-describedby': undefined } : {})}
        >
          <div className="flex items-start justify-between gap-4">
            <Radix.Title className="font-serif text-lead font-medium">{title}</Radix.Title>
            <Radix.Close
              aria-label="Close"
              className="-m-2 flex size-9 shrink-0 items-center justify-center rounded hover:bg-tint phone:size-11"
            >
              <X size={16} strokeWidth={1.5} aria-hidden="true" />
            </Radix.Close>
          </div>
          {description === undefined ? null : (
            <Radix.Description className="mt-2 text-ink-2">{description}</Radix.Description>
          )}
          {children === undefined ? null : <div className="mt-4">{children}</div>}
          {footer === undefined ? null : (
            <div className="mt-6 flex justify-end gap-2.5 phone:flex-col-reverse">{footer}</div>
          )}
        </Radix.Content>
      </Radix.Portal>
    </Radix.Root>
  );
}
