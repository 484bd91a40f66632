'use client';
import { useQuery } from '@tanstack/react-query';
import Link from 'next/link';
import { useState } from 'react';
import { TeeTemperatures } from '@/components/charts/tee-temperatures';
import { TideStrip } from '@/components/charts/tide-strip';
import { TimeViewProvider, type TimeRange } from '@/components/charts/time-view';
import { Page } from '@/components/shell/app-shell';
import { plantPath } from '@/components/shell/tabs';
import { useFormat } from '@/components/shell/units-context';
import { PageHead } from '@/components/ui/page-head';
import { ErrorState } from '@/components/ui/states';
import { formatPercent } from '@/lib/client/format';
import { formatDayTime, formatPeriod, isoInstant } from '@/lib/client/format-time';
import { daysQuery, plantQuery, tideQuery } from '@/lib/client/queries';
import type { Plant } from '@/lib/schemas/plant';
import { KERNEL_VERSION } from '@/lib/hydronics/types';
import { FeedBlock } from './feed-block';
import { PeriodLower } from './period-lower';
import { PeriodPicker } from './period-picker';
import { coverageShare, plantLead } from './plant-words';
import { usePeriod } from './use-period';

/** A plant's period: the tide, the temperatures, load against flow, the worst hours and the open episodes. */
export function PlantPage({ plantId, mayAcknowledge }: { plantId: string; mayAcknowledge: boolean }) {
  const { data: plant } = useQuery(plantQuery(plantId));
  return plant ? <PlantPeriod plant={plant} mayAcknowledge={mayAcknowledge} /> : null;
}

function PlantPeriod({ plant, mayAcknowledge }: { plant: Plant; mayAcknowledge: boolean }) {
  const control = usePeriod(plant);
  const { period } = control;
  const print = useFormat();
  const range = { from: period.from, to: period.to };
  const tide = useQuery(tideQuery(plant.id, range));
  const days = useQuery(daysQuery(plant.id, range));
  const [zoom, setZoom] = useState<TimeRange | null>(null);
  const near =
    zoom === null ? null : { from: isoInstant(Math.floor(zoom.fromMs)), to: isoInstant(Math.ceil(zoom.toMs)) };
  const finer = useQuery({ ...tideQuery(plant.id, near ?? range), enabled: near !== null });
  const shown = near !== null && finer.data && !finer.isPlaceholderData ? finer.data : (tide.data ?? null);
  const covered = coverageShare(days.data?.items ?? [], period.days);
  const failed = tide.error ?? days.error;
  const path = plantPath(plant.id, 'hours');
  const { design } = plant;
  return (
    <Page foot={{ settingsRevision: plant.settingsRevision, kernelVersion: KERNEL_VERSION, timeZone: plant.timeZone }}>
      <PageHead
        over={plant.organizationName}
        title={plant.name}
        lead={days.data ? plantLead(plant, days.data.items, print.units) : 'The period is being read.'}
        block={[
          { term: 'period', value: formatPeriod(period.fromMs, period.toMs, plant.timeZone) },
          { term: 'step', value: `${plant.stepMinutes} min` },
          {
            term: 'data through',
            value:
              plant.dataThrough === null ? 'no data yet' : formatDayTime(Date.parse(plant.dataThrough), plant.timeZone),
          },
          { term: 'coverage', value: covered === null ? '-' : `${formatPercent(covered, 1)} %` },
          {
            term: 'design',
            value: `${print.with(print.load(design.loadTons), 'load')}, ${print.with(print.deltaT(design.loadDeltaTF), 'temperatureDifference')}`,
          },
        ]}
      />
      {failed && !tide.data ? (
        <ErrorState onRetry={() => void Promise.all([tide.refetch(), days.refetch()])}>{failed.message}</ErrorState>
      ) : null}
      <TimeViewProvider
        fromMs={period.fromMs}
        toMs={period.toMs}
        onRange={(next, whole) => setZoom(whole ? null : next)}
        key={`${period.from}/${period.to}`}
      >
        <TideStrip
          tide={shown}
          fromMs={period.fromMs}
          toMs={period.toMs}
          timeZone={plant.timeZone}
          days={days.data?.items}
          stale={failed !== null || (tide.isPlaceholderData && tide.isFetching)}
          frameWords={plant.dataThrough === null ? 'no data yet' : undefined}
          hourHref={(hourStart) => `${path}/${encodeURIComponent(hourStart)}`}
          controls={<PeriodPicker control={control} timeZone={plant.timeZone} />}
          floorGpm={Math.max(50, (design.distributionPumps.flowGpm ?? 1000) / 20)}
        />
        <div className="mt-7.5">
          <TeeTemperatures
            tide={shown}
            fromMs={period.fromMs}
            toMs={period.toMs}
            timeZone={plant.timeZone}
            stale={failed !== null}
          />
        </div>
        <PeriodLower plant={plant} period={period} tide={tide.data ?? null} mayAcknowledge={mayAcknowledge} />
      </TimeViewProvider>
      <FeedBlock plantId={plant.id} />
      {plant.assumed.length > 0 ? (
        <p className="mt-7.5 max-w-[92ch] text-small text-ink-2">
          {plant.assumed.length} design {plant.assumed.length === 1 ? 'number is' : 'numbers are'} the product’s own
          assumption.{' '}
          <Link href={plantPath(plant.id, 'settings')} className="link">
            See and confirm them
          </Link>
        </p>
      ) : null}
    </Page>
  );
}
