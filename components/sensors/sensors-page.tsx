'use client';
import { useQuery } from '@tanstack/react-query';
import Link from 'next/link';
import { PeriodPicker } from '@/components/plant/period-picker';
import { usePeriod } from '@/components/plant/use-period';
import { Page } from '@/components/shell/app-shell';
import { METHOD_PATH } from '@/components/shell/foot';
import { plantPath } from '@/components/shell/tabs';
import { useFormat } from '@/components/shell/units-context';
import { PageHead } from '@/components/ui/page-head';
import { Section } from '@/components/ui/section';
import { EmptyState, ErrorState, LoadingWords, Notice, Stale } from '@/components/ui/states';
import { formatPeriod } from '@/lib/client/format-time';
import { plantQuery, sensorsQuery } from '@/lib/client/queries';
import type { Plant } from '@/lib/schemas/plant';
import type { Sensors } from '@/lib/schemas/sensors';
import { FurtherTable } from './further-table';
import { SensorsTable } from './sensors-table';
import { sensorsBlock, sensorsLead } from './sensors-words';
import { SpotChecks } from './spot-checks';

/** Each sensor's likely error with its evidence, when it failed, what cannot be told, and what to trend next. */
export function SensorsPage({ plantId, mayCheck }: { plantId: string; mayCheck: boolean }) {
  const { data: plant } = useQuery(plantQuery(plantId));
  return plant ? <PlantSensors plant={plant} mayCheck={mayCheck} /> : null;
}

function PlantSensors({ plant, mayCheck }: { plant: Plant; mayCheck: boolean }) {
  const print = useFormat();
  const control = usePeriod(plant);
  const { period } = control;
  const { data, error, refetch, isPlaceholderData } = useQuery(
    sensorsQuery(plant.id, { from: period.from, to: period.to }),
  );
  return (
    <Page
      foot={{
        settingsRevision: data?.settingsRevision ?? plant.settingsRevision,
        calibrationId: data?.calibration?.id,
        kernelVersion: data?.kernelVersion,
        timeZone: plant.timeZone,
      }}
    >
      <PageHead
        over={`${plant.name} · ${formatPeriod(period.fromMs, period.toMs, plant.timeZone)}`}
        title="Sensors"
        lead={
          data ? sensorsLead(data, print) : error ? 'The sensors could not be shown.' : 'The sensors are being read.'
        }
        block={data ? sensorsBlock(data) : undefined}
      />
      <div className="mb-5">
        <PeriodPicker control={control} timeZone={plant.timeZone} />
      </div>
      {error && !data ? (
        <ErrorState onRetry={() => void refetch()}>{error.message}</ErrorState>
      ) : !data ? (
        <LoadingWords>Reading the sensors.</LoadingWords>
      ) : (
        <Stale stale={isPlaceholderData}>
          <Told plant={plant} data={data} period={period} />
        </Stale>
      )}
      {data ? (
        <SpotChecks
          plant={plant}
          sent={data.sensors.filter((sensor) => sensor.coverage !== null).map((sensor) => sensor.role)}
          mayManage={mayCheck}
        />
      ) : null}
    </Page>
  );
}

interface ToldProps {
  plant: Plant;
  data: Sensors;
  period: ReturnType<typeof usePeriod>['period'];
}

function Told({ plant, data, period }: ToldProps) {
  return (
    <>
      {data.suspicions.length === 0 ? null : <Suspicions plantId={plant.id} suspicions={data.suspicions} />}
      <Section
        title="Likely offset"
        sub="point and central 90 % interval; filled and heavy where zero lies outside"
        aside={
          <Link href={`${METHOD_PATH}#record`} className="link">
            how a record tells
          </Link>
        }
      >
        <SensorsTable plantId={plant.id} timeZone={plant.timeZone} sensors={data.sensors} period={period} />
      </Section>
      {data.limits.length === 0 && data.header.sentence === null ? null : (
        <Section title="What the record cannot tell" sub="and what would" className="mt-7.5">
          <ul className="max-w-[860px]">
            {data.header.sentence === null ? null : (
              <li className="border-b border-grid py-1.5">{data.header.sentence}</li>
            )}
            {data.limits.map(({ limit, sentence }) => (
              <li key={limit} className="border-b border-grid py-1.5">
                {sentence}
              </li>
            ))}
          </ul>
        </Section>
      )}
      <Section title="Trend this next" sub="what one more point would do to this record" className="mt-7.5">
        {data.furtherSensors.length === 0 ? (
          <EmptyState claim="Nothing to propose.">
            {data.calibration
              ? 'No further point would narrow this record’s answer.'
              : 'It is worked out when the record has been.'}
          </EmptyState>
        ) : (
          <>
            <FurtherTable further={data.furtherSensors} />
            <p className="mt-3 text-ink-2">
              Computed on this record: the same hours, estimated again as if the point had been there with its usual
              uncertainty.
            </p>
          </>
        )}
      </Section>
    </>
  );
}

function Suspicions({ plantId, suspicions }: { plantId: string; suspicions: Sensors['suspicions'] }) {
  return (
    <Section title="Look at the mapping" sub="what the record says against it" className="mb-7.5">
      <ul className="grid max-w-[860px] gap-2.5">
        {suspicions.map(({ sentence }) => (
          <li key={sentence}>
            <Notice>
              {sentence}{' '}
              <Link href={plantPath(plantId, 'uploads')} className="link">
                Uploads
              </Link>
            </Notice>
          </li>
        ))}
      </ul>
    </Section>
  );
}
