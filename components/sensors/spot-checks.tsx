'use client';
import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useEffect, useState } from 'react';
import { useUnits } from '@/components/shell/units-context';
import { Section } from '@/components/ui/section';
import { EmptyState, ErrorState, LoadingWords, PartialNote } from '@/components/ui/states';
import { NO_BREAK_SPACE } from '@/lib/client/format';
import { analysisQuery, spotChecksQuery } from '@/lib/client/queries';
import type { Plant } from '@/lib/schemas/plant';
import { SpotCheckFormFields } from './spot-check-form';
import { SpotCheckList } from './spot-check-list';
import { checkableRoles } from './spot-check-values';

/** Readings of reference instruments: what was entered, and the form for the next one. */
export function SpotChecks({ plant, sent, mayManage }: { plant: Plant; sent: readonly string[]; mayManage: boolean }) {
  const { data, error, refetch } = useQuery(spotChecksQuery(plant.id));
  const [analysisId, setAnalysisId] = useState<string | null>(null);
  const roles = checkableRoles(sent);
  const { units } = useUnits();
  return (
    <div className="mt-7.5 grid grid-cols-[minmax(0,1fr)_480px] gap-12 max-[1100px]:grid-cols-1 phone:block">
      <Section title="Spot checks" sub="a reference read beside one of the plant’s sensors">
        {analysisId === null ? null : <UnderWay plantId={plant.id} analysisId={analysisId} />}
        {error && !data ? (
          <ErrorState onRetry={() => void refetch()}>{error.message}</ErrorState>
        ) : !data ? (
          <LoadingWords>Reading the spot checks.</LoadingWords>
        ) : data.items.length === 0 ? (
          <EmptyState claim="None yet.">
            One reading of a good thermometer settles what no record can: an offset that all sensors share, or a plant
            that ran one way all along.
          </EmptyState>
        ) : (
          <SpotCheckList
            plantId={plant.id}
            timeZone={plant.timeZone}
            checks={data.items}
            mayRemove={mayManage}
            onRemoved={setAnalysisId}
          />
        )}
      </Section>
      {mayManage && roles.length > 0 ? (
        <Section title="Enter a reading" className="phone:mt-7.5">
          {/* A figure half typed is of the unit it was begun in: another unit begins anew. */}
          <SpotCheckFormFields
            key={units}
            plantId={plant.id}
            timeZone={plant.timeZone}
            roles={roles}
            onMade={setAnalysisId}
          />
        </Section>
      ) : (
        <p className="border-t border-ink pt-2.5 text-ink-2 phone:mt-7.5">
          {mayManage
            ? 'A reading can be entered once a sensor of the loop has been sent.'
            : 'The owner or an engineer of this organization can enter a reading.'}
        </p>
      )}
    </div>
  );
}

/** Watches the analysis that a check began, and has the page read again when it is done. */
function UnderWay({ plantId, analysisId }: { plantId: string; analysisId: string }) {
  const queries = useQueryClient();
  const { data } = useQuery(analysisQuery(plantId, analysisId));
  const over = data !== undefined && ['done', 'failed'].includes(data.status);
  useEffect(() => {
    if (over) void queries.invalidateQueries({ queryKey: ['plant', plantId] });
  }, [over, plantId, queries]);
  if (data?.status === 'failed') return <ErrorState tag="not worked out">{data.failure ?? ''}</ErrorState>;
  return over ? null : (
    <PartialNote>
      The record is being worked out again: {Math.round(100 * (data?.progress ?? 0))}
      {NO_BREAK_SPACE}%.
    </PartialNote>
  );
}
