import { Undo2 } from 'lucide-react';
import { Button } from '@/components/ui/button';
import { Checkbox } from '@/components/ui/field';
import { formatNumber } from '@/lib/client/format';

export interface ConfirmBarProps {
  noun: 'column' | 'point';
  openCount: number;
  /** What is wrong with how the times are read. */
  wrong: string | null;
  /** The file was read already. */
  again: boolean;
  changed: boolean;
  ready: boolean;
  busy: boolean;
  remember: boolean;
  onRemember: (remember: boolean) => void;
  onUndo: () => void;
}

/** What is still open, undo, and the button that confirms. */
export function ConfirmBar(props: ConfirmBarProps) {
  const { noun, openCount, wrong, again, changed, ready, busy, remember, onRemember, onUndo } = props;
  return (
    <div className="mt-3 flex flex-wrap items-center justify-between gap-x-6 gap-y-3">
      <Checkbox checked={remember} onChange={onRemember}>
        Remember for this heading on this plant
      </Checkbox>
      <div className="flex flex-wrap items-center gap-2.5">
        <span role="status" className="mr-2 text-ink-2">
          {openCount > 0
            ? `${formatNumber(openCount)} ${openCount === 1 ? `${noun} still needs` : `${noun}s still need`} a role, a unit or “leave out”`
            : wrong !== null
              ? `${wrong}.`
              : again && !changed
                ? 'As it was read; nothing is changed yet.'
                : `Every ${noun} is decided.`}
        </span>
        <Button onClick={onUndo} disabled={!changed}>
          <Undo2 size={16} strokeWidth={1.5} aria-hidden="true" />
          Undo
        </Button>
        <Button type="submit" variant={ready ? 'primary' : 'normal'} disabled={!ready || busy}>
          {busy ? 'Confirming' : again ? 'Confirm and read again' : 'Confirm and import'}
        </Button>
      </div>
    </div>
  );
}
