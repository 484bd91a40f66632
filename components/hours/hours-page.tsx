'use client';
import { useQuery } from '@tanstack/react-query';
import { Download } from 'lucide-react';
import { useMemo, useState } from 'react';
import { CauseBars } from '@/components/charts/cause-bars';
import { HeatCalendar } from '@/components/charts/heat-calendar';
import { PeriodPicker } from '@/components/plant/period-picker';
import { usePeriod } from '@/components/plant/use-period';
import { Page } from '@/components/shell/app-shell';
import { plantPath } from '@/components/shell/tabs';
import { useUnits } from '@/components/shell/units-context';
import { Button } from '@/components/ui/button';
import { PageHead } from '@/components/ui/page-head';
import { Section } from '@/components/ui/section';
import { Segmented } from '@/components/ui/segmented';
import { Select } from '@/components/ui/select';
import { EmptyState, ErrorState, LoadingWords, Stale } from '@/components/ui/states';
import { useKeys } from '@/components/ui/use-keys';
import { queryString } from '@/lib/client/api';
import { formatPeriod } from '@/lib/client/format-time';
import { plantQuery } from '@/lib/client/queries';
import { causeWords } from '@/lib/client/words';
import { CAUSES, KERNEL_VERSION } from '@/lib/hydronics/types';
import type { Plant } from '@/lib/schemas/plant';
import { RANKS, type Rank } from '@/lib/schemas/results';
import { useRouter } from 'next/navigation';
import { causeTotals, hoursLead } from './hours-words';
import { HoursTable } from './hours-table';
import { useAllHours, useRankedHours } from './use-hours';

const RANK_LABELS: Readonly<Record<Rank, string>> = {
  excess: 'excess flow',
  cost: 'cost',
  deltaT: 'delta-T',
  reverse: 'reverse',
};
const ANY = 'any';
type CauseChoice = (typeof CAUSES)[number] | typeof ANY;

/** The ranked list of low delta-T hours, the calendar of all hours, and what the causes add up to. */
export function HoursPage({ plantId }: { plantId: string }) {
  const { data: plant } = useQuery(plantQuery(plantId));
  return plant ? <PlantHours plant={plant} /> : null;
}

function PlantHours({ plant }: { plant: Plant }) {
  const control = usePeriod(plant);
  const router = useRouter();
  const { units } = useUnits();
  const { period } = control;
  const [rank, setRank] = useState<Rank>('excess');
  const [cause, setCause] = useState<CauseChoice>(ANY);
  const [ringed, setRinged] = useState<string | null>(null);
  const range = { from: period.from, to: period.to };
  const filter = { ...range, rank, cause: cause === ANY ? undefined : cause };
  const ranked = useRankedHours(plant.id, filter);
  const all = useAllHours(plant.id, range);
  const causes = useMemo(() => causeTotals(all.hours ?? []), [all.hours]);
  useKeys(Object.fromEntries(RANKS.map((each, index) => [String(index + 1), () => setRank(each)])));
  const download = (format: 'csv' | 'xlsx') =>
    `/api/v1/plants/${plant.id}/hours${queryString({ ...filter, format, units })}`;
  return (
    <Page foot={{ settingsRevision: plant.settingsRevision, kernelVersion: KERNEL_VERSION, timeZone: plant.timeZone }}>
      <PageHead
        over={`${plant.name} · ${formatPeriod(period.fromMs, period.toMs, plant.timeZone)}`}
        title="Hours"
        lead={all.hours ? hoursLead(all.hours) : 'The hours are being read.'}
        actions={(['csv', 'xlsx'] as const).map((format) => (
          <Button key={format} asChild>
            <a href={download(format)} download>
              <Download size={16} strokeWidth={1.5} aria-hidden="true" />
              {format.toUpperCase()}
            </a>
          </Button>
        ))}
      />
      <div className="mb-5 flex flex-wrap items-center gap-x-7 gap-y-3">
        <PeriodPicker control={control} timeZone={plant.timeZone} />
        <Segmented
          label="Rank by"
          value={rank}
          onChange={setRank}
          options={RANKS.map((value) => ({ value, label: RANK_LABELS[value] }))}
        />
        <div className="flex items-center gap-2.5">
          <span id="cause-label">Cause</span>
          <Select<CauseChoice>
            value={cause}
            onChange={setCause}
            aria-label="Cause"
            className="w-[190px]"
            options={[{ value: ANY, label: 'all' }, ...CAUSES.map((value) => ({ value, label: causeWords(value) }))]}
          />
        </div>
      </div>
      <div className="grid grid-cols-[minmax(0,1fr)_454px] gap-11 max-[1300px]:grid-cols-1 phone:flex phone:flex-col">
        <div className="min-w-0 phone:order-2">
          {ranked.error && ranked.hours === null ? (
            <ErrorState onRetry={ranked.retry}>{ranked.error.message}</ErrorState>
          ) : ranked.hours === null ? (
            <LoadingWords>Ranking the hours.</LoadingWords>
          ) : ranked.hours.length === 0 ? (
            <EmptyState claim="No low hour.">
              {cause === ANY
                ? 'In this period the delta-T held at every load that counts.'
                : 'None with this cause. Look at all causes, or at another period.'}
            </EmptyState>
          ) : (
            <Stale stale={ranked.stale}>
              <HoursTable
                plantId={plant.id}
                timeZone={plant.timeZone}
                hours={ranked.hours}
                rank={rank}
                currency={plant.tariff?.currency}
                ringed={ringed}
                onHover={setRinged}
              />
              <p className="mt-3 flex flex-wrap items-center gap-3.5 text-ink-2">
                <span>1 to {ranked.hours.length}</span>
                {ranked.more === null ? null : <Button onClick={ranked.more}>Show more</Button>}
              </p>
            </Stale>
          )}
        </div>
        <div className="min-w-0 phone:order-1">
          <Section title="Heat calendar" sub="day by hour, low delta-T hours" ruled={false}>
            {all.error && all.hours === null ? (
              <ErrorState onRetry={all.retry}>{all.error.message}</ErrorState>
            ) : all.hours === null ? (
              <LoadingWords>Reading the hours.</LoadingWords>
            ) : (
              <HeatCalendar
                hours={all.hours}
                fromMs={period.fromMs}
                toMs={period.toMs}
                timeZone={plant.timeZone}
                ringed={ringed}
                onHover={setRinged}
                onSelect={(hourStart) =>
                  router.push(`${plantPath(plant.id, 'hours')}/${encodeURIComponent(hourStart)}`)
                }
              />
            )}
          </Section>
          {causes.length === 0 ? null : (
            <Section title="By cause" ruled={false} className="mt-7.5">
              <CauseBars causes={causes} currency={plant.tariff?.currency} />
            </Section>
          )}
          <p className="mt-4 text-small text-ink-2">
            Excess flow is the larger of primary and secondary flow, less load over expected delta-T. Low: load above{' '}
            {Math.round(plant.low.loadShare * 100)} % of design, and load or production delta-T below{' '}
            {Math.round(plant.low.deltaTShare * 100)} % of design.
          </p>
        </div>
      </div>
    </Page>
  );
}
