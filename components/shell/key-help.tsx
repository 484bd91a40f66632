'use client';
import { Dialog } from '@/components/ui/dialog';
import { ArrowKeyCap, KeyCap } from '@/components/ui/key-cap';
import type { ReactNode } from 'react';

const then = <span className="text-ink-3"> then </span>;
const or = <span className="text-ink-3"> or </span>;

const KEYS: readonly { keys: ReactNode; does: string }[] = [
  { keys: <KeyCap>/</KeyCap>, does: 'change plant' },
  { keys: <KeyCap>?</KeyCap>, does: 'this list' },
  { keys: <KeyCap>Esc</KeyCap>, does: 'close, or clear the selection' },
  { keys: <KeyCap>t</KeyCap>, does: 'the chart in focus as a table, and back' },
  { keys: <><ArrowKeyCap to="left" /> <ArrowKeyCap to="right" /></>, does: 'on a strip: one bar; with Shift one day' }, // prettier-ignore
  { keys: <><KeyCap>Home</KeyCap> <KeyCap>End</KeyCap></>, does: 'on a strip: its ends' }, // prettier-ignore
  { keys: <><KeyCap>+</KeyCap> <KeyCap>−</KeyCap></>, does: 'on a strip: zoom at the cursor' }, // prettier-ignore
  { keys: <><KeyCap>n</KeyCap> <KeyCap>p</KeyCap></>, does: 'on a strip: next and previous reverse stretch' }, // prettier-ignore
  { keys: <><KeyCap>j</KeyCap>{or}<KeyCap>k</KeyCap></>, does: 'in a list: next and previous row' }, // prettier-ignore
  { keys: <KeyCap>Enter</KeyCap>, does: 'open what the cursor or the row is on' },
];

export interface KeyHelpProps {
  open: boolean;
  onOpenChange: (open: boolean) => void;
  /** Tabs with a key of their own, as far as they exist here. */
  tabs: readonly { label: string; shortcut: string | null }[];
}

/** Every key, in one list (`?`). */
export function KeyHelp({ open, onOpenChange, tabs }: KeyHelpProps) {
  const reached = tabs.filter((tab) => tab.shortcut !== null);
  return (
    <Dialog
      open={open}
      onOpenChange={onOpenChange}
      title="Keys"
      description="They are silent while a field has focus, and can be switched off in the menu of your name."
    >
      <dl className="grid grid-cols-[max-content_1fr] gap-x-6 gap-y-2">
        {reached.length === 0 ? null : (
          <div className="col-span-2 grid grid-cols-subgrid items-baseline">
            <dt className="whitespace-nowrap">
              <KeyCap>g</KeyCap>
              {then}
              {reached.map((tab) => (
                <span key={tab.label} className="mr-1">
                  <KeyCap>{tab.shortcut}</KeyCap>
                </span>
              ))}
            </dt>
            <dd>go to {reached.map((tab) => tab.label).join(', ')}</dd>
          </div>
        )}
        {KEYS.map(({ keys, does }) => (
          <div key={does} className="col-span-2 grid grid-cols-subgrid items-baseline">
            <dt className="whitespace-nowrap">{keys}</dt>
            <dd>{does}</dd>
          </div>
        ))}
      </dl>
    </Dialog>
  );
}
