'use client';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import Link from 'next/link';
import { toast } from 'sonner';
import { DirectionMark } from '@/components/marks/direction-mark';
import { plantPath } from '@/components/shell/tabs';
import { useFormat } from '@/components/shell/units-context';
import { TextButton } from '@/components/ui/button';
import { EmptyState } from '@/components/ui/states';
import { sendJson } from '@/lib/client/api';
import { formatMoney } from '@/lib/client/format';
import { formatDayTime, formatStretch } from '@/lib/client/format-time';
import { causeWords } from '@/lib/client/words';
import type { Plant } from '@/lib/schemas/plant';
import type { Episode } from '@/lib/schemas/results';

/** How many are listed; the calendar and the list of hours have the rest. */
const SHOWN = 8;

/** Newest first; those nobody has acknowledged come before the others. */
export function EpisodeList({
  plant,
  episodes,
  mayAcknowledge,
}: {
  plant: Plant;
  episodes: readonly Episode[];
  mayAcknowledge: boolean;
}) {
  const newest = [...episodes].sort((a, b) => b.startedAt.localeCompare(a.startedAt));
  const ordered = [
    ...newest.filter((each) => each.acknowledgedAt === null),
    ...newest.filter((each) => each.acknowledgedAt !== null),
  ];
  if (ordered.length === 0)
    return <EmptyState claim="No episode.">Nothing ran wrong for an hour or more in this period.</EmptyState>;
  return (
    <>
      <ul>
        {ordered.slice(0, SHOWN).map((episode) => (
          <EpisodeItem key={episode.id} plant={plant} episode={episode} mayAcknowledge={mayAcknowledge} />
        ))}
      </ul>
      {ordered.length > SHOWN ? (
        <p className="pt-2 text-small text-ink-2">
          {SHOWN} of {ordered.length} shown
        </p>
      ) : null}
    </>
  );
}

function EpisodeItem({ plant, episode, mayAcknowledge }: { plant: Plant; episode: Episode; mayAcknowledge: boolean }) {
  const print = useFormat();
  const queries = useQueryClient();
  const acknowledge = useMutation({
    mutationFn: () => sendJson('PATCH', `/episodes/${episode.id}`, { acknowledged: true }),
    onSuccess: () => queries.invalidateQueries({ queryKey: ['plant', plant.id, 'episodes'] }),
    onError: (error) => toast.error(error.message),
  });
  const reverse = episode.largestReverseFlowGpm !== null && episode.largestReverseFlowGpm > 0;
  const facts = [
    reverse
      ? `to ${print.with(print.bypass(-(episode.largestReverseFlowGpm ?? 0)), 'flow')}`
      : causeWords(episode.cause),
    episode.warmestSupplyF === null
      ? null
      : `supply ${print.with(print.temperature(episode.warmestSupplyF), 'temperature')}`,
    episode.excessCost === null
      ? null
      : `${formatMoney(episode.excessCost, 'hour')} ${plant.tariff?.currency ?? ''}`.trim(),
  ].filter((fact) => fact !== null);
  return (
    <li className="grid grid-cols-[20px_minmax(0,1fr)_auto] gap-x-3 items-start border-b border-grid py-2">
      <DirectionMark
        direction={reverse ? 'reverse' : 'forward'}
        label={reverse ? 'reverse' : 'not reverse'}
        className="mt-0.5"
      />
      <div>
        <Link
          href={`${plantPath(plant.id, 'hours')}/${encodeURIComponent(episode.worstHour)}`}
          className="font-semibold hover:underline"
        >
          {formatStretch(Date.parse(episode.startedAt), Date.parse(episode.endedAt), plant.timeZone)}
        </Link>
        <p className="text-ink-2">{facts.join(', ')}</p>
        {episode.note === null ? null : <p className="italic">{episode.note}</p>}
      </div>
      {episode.acknowledgedAt !== null ? (
        <p className="text-end text-small text-ink-2">
          seen {formatDayTime(Date.parse(episode.acknowledgedAt), plant.timeZone)}
          {episode.acknowledgedBy === null ? null : (
            <>
              <br />
              by {episode.acknowledgedBy}
            </>
          )}
        </p>
      ) : mayAcknowledge ? (
        <TextButton onClick={() => acknowledge.mutate()} disabled={acknowledge.isPending}>
          acknowledge
        </TextButton>
      ) : null}
    </li>
  );
}
