'use client';
import { useQuery } from '@tanstack/react-query';
import { ChevronLeft, ChevronRight } from 'lucide-react';
import Link from 'next/link';
import { useRouter } from 'next/navigation';
import { DegreeLedger } from '@/components/charts/degree-ledger';
import { ledgerLines } from '@/components/charts/ledger-lines';
import { TideMinutes } from '@/components/charts/tide-minutes';
import { Page } from '@/components/shell/app-shell';
import { plantPath } from '@/components/shell/tabs';
import { useFormat, type BoundFormat } from '@/components/shell/units-context';
import { TeeSheet } from '@/components/tees/tee-sheet';
import { Button } from '@/components/ui/button';
import { Caution } from '@/components/ui/caution';
import { PageHead } from '@/components/ui/page-head';
import { Section } from '@/components/ui/section';
import { ErrorState, LoadingWords } from '@/components/ui/states';
import { useKeys } from '@/components/ui/use-keys';
import { formatMoney, formatNumber, formatPercent, formatProbability } from '@/lib/client/format';
import { formatDayTime, formatHourTitle, isoInstant } from '@/lib/client/format-time';
import { hourQuery, plantQuery, tideQuery } from '@/lib/client/queries';
import { causeWords } from '@/lib/client/words';
import type { Plant } from '@/lib/schemas/plant';
import type { HourDetail } from '@/lib/schemas/results';
import { hourLead } from './hour-words';

const HOUR_MS = 3_600_000;
/** The strip around the hour holds two hours on either side. */
const AROUND_MS = 2 * HOUR_MS;

/** One hour: the tee sheet, the evidence, the ledger, and the minutes around it. */
export function HourPage({ plantId, hourStart }: { plantId: string; hourStart: string }) {
  const { data: plant } = useQuery(plantQuery(plantId));
  const { data: detail, error, refetch } = useQuery(hourQuery(plantId, hourStart));
  if (!plant) return null;
  return (
    <Page
      foot={{
        settingsRevision: detail?.settingsRevision ?? plant.settingsRevision,
        calibrationId: detail?.calibrationId,
        kernelVersion: detail?.kernelVersion,
        timeZone: plant.timeZone,
      }}
    >
      {detail ? (
        <Hour plant={plant} detail={detail} />
      ) : (
        <>
          <PageHead
            over={<BackLink plantId={plantId} />}
            title={formatHourTitle(hourStart, plant.timeZone)}
            lead={error ? 'This hour could not be shown.' : 'The hour is being read.'}
          />
          {error ? (
            <ErrorState onRetry={() => void refetch()}>{error.message}</ErrorState>
          ) : (
            <LoadingWords>Reading the hour.</LoadingWords>
          )}
        </>
      )}
    </Page>
  );
}

function BackLink({ plantId }: { plantId: string }) {
  return (
    <Link href={plantPath(plantId, 'hours')} className="link">
      Hours
    </Link>
  );
}

function Hour({ plant, detail }: { plant: Plant; detail: HourDetail }) {
  const print = useFormat();
  const { hour } = detail;
  const startMs = Date.parse(hour.hourStart);
  const around = {
    from: isoInstant(startMs - AROUND_MS),
    to: isoInstant(startMs + HOUR_MS + AROUND_MS),
    barMinutes: plant.stepMinutes,
  };
  const minutes = useQuery(tideQuery(plant.id, around));
  const lines = ledgerLines({
    designDeltaTF: plant.design.loadDeltaTF ?? null,
    expectedDeltaTF: hour.expectedDeltaTF,
    ...detail.ledger,
  });
  return (
    <>
      <PageHead
        over={
          <>
            <BackLink plantId={plant.id} />
            {detail.rank === null ? null : ` · no. ${detail.rank} of ${detail.rankOf} by excess flow`}
          </>
        }
        title={formatHourTitle(hour.hourStart, plant.timeZone)}
        lead={hourLead(detail, print)}
        block={titleBlock(plant, detail, print)}
      />
      <HourSteps plant={plant} detail={detail} />
      <div className="grid grid-cols-[852px_minmax(0,1fr)] gap-13 max-[1300px]:grid-cols-1 phone:block">
        <div className="min-w-0">
          <TeeSheet detail={detail} arrangement={plant.arrangement} />
          <Section
            title="Inside and around the hour"
            sub={`${plant.stepMinutes} min, ${print.unit('flow')}`}
            ruled={false}
            className="mt-7.5"
          >
            {minutes.data ? (
              <TideMinutes tide={minutes.data} timeZone={plant.timeZone} hourStart={hour.hourStart} />
            ) : minutes.error ? (
              <ErrorState onRetry={() => void minutes.refetch()}>{minutes.error.message}</ErrorState>
            ) : (
              <LoadingWords>Reading the minutes.</LoadingWords>
            )}
          </Section>
        </div>
        <div className="min-w-0 phone:mt-7.5">
          <Section title="Evidence">
            <ol>
              {detail.evidence.map(({ claim, detail: words }, index) => (
                <li key={claim} className="grid grid-cols-[24px_minmax(0,1fr)] border-b border-grid py-2.5">
                  <span className="font-serif text-[17px] font-medium">{index + 1}</span>
                  <p>
                    <b>{claim}</b> {words}
                  </p>
                </li>
              ))}
            </ol>
          </Section>
          <Section title="Ledger of the hour" sub={print.unit('temperatureDifference')} className="mt-7.5">
            <DegreeLedger caption="Where the degrees of this hour went" lines={lines} compact />
          </Section>
        </div>
      </div>
      <div className="mt-7.5 border-t border-ink">
        <Caution />
      </div>
    </>
  );
}

function HourSteps({ plant, detail }: { plant: Plant; detail: HourDetail }) {
  const router = useRouter();
  const href = (hourStart: string) => `${plantPath(plant.id, 'hours')}/${encodeURIComponent(hourStart)}`;
  const go = (hourStart: string | null) => {
    if (hourStart !== null) router.push(href(hourStart));
  };
  useKeys({ '[': () => go(detail.before), ']': () => go(detail.after) });
  return (
    <nav aria-label="Hours beside this one" className="mb-5 flex flex-wrap gap-2.5">
      {detail.before === null ? null : (
        <Button asChild variant="quiet">
          <Link href={href(detail.before)}>
            <ChevronLeft size={16} strokeWidth={1.5} aria-hidden="true" />
            {formatDayTime(Date.parse(detail.before), plant.timeZone)}
          </Link>
        </Button>
      )}
      {detail.after === null ? null : (
        <Button asChild variant="quiet">
          <Link href={href(detail.after)}>
            {formatDayTime(Date.parse(detail.after), plant.timeZone)}
            <ChevronRight size={16} strokeWidth={1.5} aria-hidden="true" />
          </Link>
        </Button>
      )}
    </nav>
  );
}

function titleBlock(plant: Plant, { hour, steadyIntervals, intervals }: HourDetail, print: BoundFormat) {
  const share =
    hour.loadTons === null || plant.design.loadTons === undefined ? null : hour.loadTons / plant.design.loadTons;
  const cost =
    hour.excessCost === null ? '' : `, ${formatMoney(hour.excessCost, 'hour')} ${plant.tariff?.currency ?? ''}`;
  return [
    {
      term: 'cause',
      value:
        hour.low === 0
          ? 'not low'
          : `${causeWords(hour.cause)}${hour.causeConfidence === null ? '' : `, confidence ${formatProbability(hour.causeConfidence)}`}`,
    },
    {
      term: 'load',
      value: `${print.with(print.load(hour.loadTons), 'load')}${share === null ? '' : `, ${formatPercent(share)} % of design`}`,
    },
    { term: 'excess flow', value: print.with(print.flow(hour.excessFlowGpm), 'flow') },
    { term: 'excess energy', value: `${formatNumber(hour.excessEnergyKwh)} kWh${cost}` },
    {
      term: 'quality',
      value: `${formatNumber(hour.quality, { decimals: 2 })}, steady in ${steadyIntervals} of ${intervals}`,
    },
  ];
}
