'use client';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { toast } from 'sonner';
import { useFormat, type BoundFormat } from '@/components/shell/units-context';
import { Button, TextButton } from '@/components/ui/button';
import { Dialog } from '@/components/ui/dialog';
import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { sendJson } from '@/lib/client/api';
import { formatNumber, MISSING, NO_BREAK_SPACE } from '@/lib/client/format';
import { formatDayTime } from '@/lib/client/format-time';
import { SpotCheckRemoved, type SpotCheck } from '@/lib/schemas/sensors';

export interface SpotCheckListProps {
  plantId: string;
  timeZone: string;
  checks: readonly SpotCheck[];
  mayRemove: boolean;
  /** A check was taken out; the record is being worked out again. */
  onRemoved: (analysisId: string | null) => void;
}

/** Reference readings, the latest first, each beside what the plant's own sensor showed. */
export function SpotCheckList({ plantId, timeZone, checks, mayRemove, onRemoved }: SpotCheckListProps) {
  const print = useFormat();
  return (
    <Table caption="Spot checks, the latest first" className="phone:block phone:[&_tbody]:block">
      <thead className="phone:sr-only">
        <tr>
          <HeadCell>sensor</HeadCell>
          <HeadCell>when</HeadCell>
          <HeadCell numeric>reference</HeadCell>
          <HeadCell numeric>plant’s own</HeadCell>
          <HeadCell numeric>reads</HeadCell>
          <HeadCell>instrument, note</HeadCell>
          {mayRemove ? (
            <HeadCell>
              <span className="sr-only">what can be done</span>
            </HeadCell>
          ) : null}
        </tr>
      </thead>
      <tbody>
        {checks.map((check) => (
          <tr
            key={check.id}
            className="phone:grid phone:grid-cols-[minmax(0,1fr)_auto] phone:gap-x-4 phone:border-b phone:border-grid phone:py-2.5 phone:[&>*]:border-0! phone:[&>*]:p-0!"
          >
            <RowHead>{check.label}</RowHead>
            <td className="whitespace-nowrap text-ink-2 phone:text-end">
              {formatDayTime(Date.parse(check.at), timeZone)}
            </td>
            <Cell numeric className="whitespace-nowrap phone:text-start!">
              <span className="hidden text-ink-2 phone:inline">reference </span>
              {reading(check, 'reading', print)}
            </Cell>
            <Cell numeric className="whitespace-nowrap italic">
              <span className="hidden text-ink-2 not-italic phone:inline">plant’s own </span>
              {reading(check, 'shown', print)}
            </Cell>
            <Cell numeric className="font-semibold whitespace-nowrap phone:text-start!">
              <span className="hidden font-normal text-ink-2 phone:inline">reads </span>
              {difference(check, print)}
            </Cell>
            <td className="text-small phone:order-last phone:col-span-2">
              {check.instrument === '' ? null : <span className="block">{check.instrument}</span>}
              {check.note === '' ? null : <span className="block italic">{check.note}</span>}
              <span className="block text-ink-2">{check.createdBy ?? 'by a key'}</span>
            </td>
            {mayRemove ? (
              <td className="text-end">
                <RemoveSpotCheck plantId={plantId} check={check} timeZone={timeZone} onRemoved={onRemoved} />
              </td>
            ) : null}
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

function reading(check: SpotCheck, which: 'reading' | 'shown', print: BoundFormat): string {
  const degrees = which === 'reading' ? check.readingF : check.shownF;
  const gpm = which === 'reading' ? check.readingGpm : check.shownGpm;
  if (degrees !== null) return print.with(print.temperature(degrees), 'temperature');
  return gpm === null ? MISSING : print.with(print.flow(gpm), 'flow');
}

/** What the plant's own sensor read too much, by this one reading. */
function difference(check: SpotCheck, print: BoundFormat): string {
  if (check.readingF !== null && check.shownF !== null)
    return print.with(print.deltaTChange(check.shownF - check.readingF), 'temperatureDifference');
  if (check.readingGpm !== null && check.shownGpm !== null && check.readingGpm !== 0) {
    const percent = 100 * (check.shownGpm / check.readingGpm - 1);
    return `${formatNumber(percent, { decimals: 1, sign: 'always' })}${NO_BREAK_SPACE}%`;
  }
  return MISSING;
}

interface RemoveProps {
  plantId: string;
  check: SpotCheck;
  timeZone: string;
  onRemoved: (analysisId: string | null) => void;
}

function RemoveSpotCheck({ plantId, check, timeZone, onRemoved }: RemoveProps) {
  const [asking, setAsking] = useState(false);
  const queries = useQueryClient();
  const remove = useMutation({
    mutationFn: async () =>
      SpotCheckRemoved.parse(await sendJson('DELETE', `/plants/${plantId}/spot-checks/${check.id}`)),
    onSuccess: async ({ analysisId }) => {
      setAsking(false);
      onRemoved(analysisId);
      await queries.invalidateQueries({ queryKey: ['plant', plantId, 'spot-checks'] });
    },
    onError: (error) => toast.error(error.message),
  });
  const when = formatDayTime(Date.parse(check.at), timeZone);
  return (
    <>
      <TextButton onClick={() => setAsking(true)} aria-label={`remove the check of ${check.label}, ${when}`}>
        remove
      </TextButton>
      <Dialog
        open={asking}
        onOpenChange={setAsking}
        title="Take this reading out?"
        description={`The reading of ${check.label}, ${when}, goes, and the record is worked out again without it.`}
        footer={
          <>
            <Button onClick={() => setAsking(false)}>Keep it</Button>
            <Button variant="primary" disabled={remove.isPending} onClick={() => remove.mutate()}>
              Take out
            </Button>
          </>
        }
      />
    </>
  );
}
