'use client';
import { ChevronLeft, ChevronRight } from 'lucide-react';
import { useState } from 'react';
import { Button } from '@/components/ui/button';
import { Dialog } from '@/components/ui/dialog';
import { Field, Input } from '@/components/ui/field';
import { Segmented } from '@/components/ui/segmented';
import { addLocalDays, formatPeriod } from '@/lib/client/format-time';
import { PERIOD_DAYS, type PeriodName, type usePeriod } from './use-period';

const NAMES: readonly PeriodName[] = ['day', 'week', '2 weeks', 'month', 'own'];

/** Day, week, two weeks, four weeks or one's own; and the stretch before and after. */
export function PeriodPicker({ control, timeZone }: { control: ReturnType<typeof usePeriod>; timeZone: string }) {
  const { period, setLength, step, choose } = control;
  const [own, setOwn] = useState<{ from: string; last: string } | null>(null);
  const pick = (name: PeriodName) => {
    if (name === 'own') setOwn({ from: period.from, last: addLocalDays(period.to, -1) });
    else setLength(PERIOD_DAYS[name]);
  };
  const wrong = own !== null && !(own.from !== '' && own.last !== '' && own.from <= own.last);
  return (
    <div className="flex flex-wrap items-center gap-x-3.5 gap-y-2">
      <Segmented
        label="Period"
        hideLabel
        value={period.name}
        onChange={pick}
        options={NAMES.map((value) => ({ value, label: value }))}
      />
      <div className="flex items-center gap-1">
        <StepButton label="the stretch before" onClick={() => step(-1)}>
          <ChevronLeft size={16} strokeWidth={1.5} aria-hidden="true" />
        </StepButton>
        <b className="px-1">{formatPeriod(period.fromMs, period.toMs, timeZone, true)}</b>
        <StepButton label="the stretch after" onClick={() => step(1)}>
          <ChevronRight size={16} strokeWidth={1.5} aria-hidden="true" />
        </StepButton>
      </div>
      <Dialog
        open={own !== null}
        onOpenChange={(open) => !open && setOwn(null)}
        title="A period of your own"
        description={`Local days of the plant (${timeZone}), both included.`}
        footer={
          <Button
            variant="primary"
            disabled={wrong}
            onClick={() => {
              if (own) choose({ from: own.from, to: addLocalDays(own.last, 1) });
              setOwn(null);
            }}
          >
            Show
          </Button>
        }
      >
        <div className="grid grid-cols-2 gap-4">
          <Field label="First day">
            {(ids) => (
              <Input
                {...ids}
                type="date"
                value={own?.from ?? ''}
                onChange={(event) => setOwn({ from: event.target.value, last: own?.last ?? '' })}
              />
            )}
          </Field>
          <Field label="Last day" error={wrong ? 'The last day lies before the first.' : undefined}>
            {(ids) => (
              <Input
                {...ids}
                type="date"
                value={own?.last ?? ''}
                onChange={(event) => setOwn({ from: own?.from ?? '', last: event.target.value })}
              />
            )}
          </Field>
        </div>
      </Dialog>
    </div>
  );
}

function StepButton({ label, onClick, children }: { label: string; onClick: () => void; children: React.ReactNode }) {
  return (
    <button
      type="button"
      aria-label={label}
      onClick={onClick}
      className="flex size-7 items-center justify-center rounded hover:bg-tint phone:size-11"
    >
      {children}
    </button>
  );
}
