'use client';
import { useQuery } from '@tanstack/react-query';
import Link from 'next/link';
import { useMemo } from 'react';
import { LoadFlowScatter } from '@/components/charts/load-flow-scatter';
import { scatterPoints } from '@/components/charts/scatter-points';
import { HoursTable } from '@/components/hours/hours-table';
import { plantPath } from '@/components/shell/tabs';
import { Section } from '@/components/ui/section';
import { EmptyState, ErrorState, LoadingWords } from '@/components/ui/states';
import { episodesQuery, hoursQuery, tideQuery } from '@/lib/client/queries';
import type { Plant } from '@/lib/schemas/plant';
import type { Tide } from '@/lib/schemas/results';
import { EpisodeList } from './episode-list';
import type { PagePeriod } from './use-period';

/** Most hours the scatter draws: two months. */
const SCATTER_DAYS = 62;

interface PeriodLowerProps {
  plant: Plant;
  period: PagePeriod;
  tide: Tide | null;
  mayAcknowledge: boolean;
}

/** Under the strip: load against flow, episodes, and the hours that cost most. */
export function PeriodLower({ plant, period, tide, mayAcknowledge }: PeriodLowerProps) {
  const range = { from: period.from, to: period.to };
  const hourly = useQuery({
    ...tideQuery(plant.id, { ...range, barMinutes: 60 }),
    enabled: period.days <= SCATTER_DAYS && tide?.barMinutes !== 60,
  });
  const marks = tide?.barMinutes === 60 ? tide : (hourly.data ?? null);
  const points = useMemo(() => (marks === null ? [] : scatterPoints(marks)), [marks]);
  const rank = plant.tariff === null ? 'excess' : 'cost';
  const hours = useQuery(hoursQuery(plant.id, { ...range, rank, limit: 8 }));
  const episodes = useQuery(episodesQuery(plant.id, range));
  const unitFlows = useMemo(() => runningTotals(plant), [plant]);
  return (
    <>
      <div className="mt-7.5 grid grid-cols-[600px_minmax(0,1fr)] gap-12 max-[1200px]:grid-cols-1 phone:block">
        <LoadFlowScatter
          points={points}
          fromMs={period.fromMs}
          toMs={period.toMs}
          timeZone={plant.timeZone}
          designDeltaTF={plant.design.loadDeltaTF}
          unitFlowsGpm={unitFlows}
        />
        <Section title="Open episodes" sub="runs of hours with one cause" className="phone:mt-7.5">
          {episodes.error && !episodes.data ? (
            <ErrorState onRetry={() => void episodes.refetch()}>{episodes.error.message}</ErrorState>
          ) : !episodes.data ? (
            <LoadingWords>Reading the episodes.</LoadingWords>
          ) : (
            <EpisodeList plant={plant} episodes={episodes.data.items} mayAcknowledge={mayAcknowledge} />
          )}
        </Section>
      </div>
      <Section
        title="Worst hours"
        sub={rank === 'cost' ? 'by cost' : 'by excess flow'}
        className="mt-7.5"
        aside={
          <Link href={`${plantPath(plant.id, 'hours')}?from=${period.from}&to=${period.to}`} className="link">
            all low delta-T hours
          </Link>
        }
      >
        {hours.error && !hours.data ? (
          <ErrorState onRetry={() => void hours.refetch()}>{hours.error.message}</ErrorState>
        ) : !hours.data ? (
          <LoadingWords>Ranking the hours.</LoadingWords>
        ) : hours.data.items.length === 0 ? (
          <EmptyState claim="No low hour.">In this period the delta-T held at every load that counts.</EmptyState>
        ) : (
          <HoursTable
            plantId={plant.id}
            timeZone={plant.timeZone}
            hours={hours.data.items}
            rank={rank}
            currency={plant.tariff?.currency}
          />
        )}
      </Section>
    </>
  );
}

/** Flow of one unit, of two, and so on, in unit order: where the scatter's dotted lines stand. */
function runningTotals(plant: Plant): number[] {
  let sum = 0;
  return plant.design.productionUnits.flatMap((unit) => {
    if (unit.flowGpm === undefined) return [];
    sum += unit.flowGpm;
    return [sum];
  });
}
