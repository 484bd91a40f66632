'use client';
import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useRouter } from 'next/navigation';
import { toast } from 'sonner';
import { Page } from '@/components/shell/app-shell';
import { PageHead } from '@/components/ui/page-head';
import { Section } from '@/components/ui/section';
import { sendJson } from '@/lib/client/api';
import { formatNumber, MISSING } from '@/lib/client/format';
import { plantQuery } from '@/lib/client/queries';
import { KERNEL_VERSION } from '@/lib/hydronics/types';
import { Plant } from '@/lib/schemas/plant';
import { PlantFormFields } from './plant-form';
import { formOf, plantBody, type PlantFormOutput } from './plant-form-values';

/** A plant's design numbers; a change is a new revision, and the record is worked out again with it. */
export function SettingsPage({ plantId, mayManage }: { plantId: string; mayManage: boolean }) {
  const queries = useQueryClient();
  const router = useRouter();
  const { data: plant } = useQuery(plantQuery(plantId));
  if (!plant) return null;
  const save = async (form: PlantFormOutput) => {
    const saved = Plant.parse(await sendJson('PATCH', `/plants/${plantId}`, plantBody(form, 'patch')));
    queries.setQueryData(plantQuery(plantId).queryKey, saved);
    await queries.invalidateQueries({ queryKey: ['plant', plantId] });
    router.refresh();
    toast.success(
      saved.settingsRevision === plant.settingsRevision
        ? 'Saved.'
        : `Saved as revision ${saved.settingsRevision}; the record is being worked out again.`,
    );
  };
  return (
    <Page foot={{ settingsRevision: plant.settingsRevision, kernelVersion: KERNEL_VERSION, timeZone: plant.timeZone }}>
      <PageHead
        over={plant.name}
        title="Settings"
        lead={
          plant.assumed.length === 0
            ? 'Every design number has been given.'
            : `${plant.assumed.length} design ${plant.assumed.length === 1 ? 'number is' : 'numbers are'} assumed until someone confirms ${plant.assumed.length === 1 ? 'it' : 'them'}.`
        }
        block={[
          { term: 'revision', value: String(plant.settingsRevision) },
          { term: 'organization', value: plant.organizationName },
        ]}
      />
      <PlantFormFields
        key={plant.settingsRevision}
        start={formOf(plant)}
        assumed={(path) => assumedText(plant, path)}
        stepLocked={plant.dataThrough !== null}
        readOnly={!mayManage}
        submitWord="Save as a new revision"
        onSave={save}
      />
      {plant.assumed.length === 0 ? null : (
        <Section
          title="Assumed"
          sub="common practice of the trade, until someone gives the plant’s own"
          className="mt-7.5 max-w-[960px]"
        >
          <p className="columns-2 text-small text-ink-2 phone:columns-1">
            {plant.assumed.map((path) => (
              <span key={path} className="block">
                {path}: {numberAt(plant, path)}
              </span>
            ))}
          </p>
        </Section>
      )}
    </Page>
  );
}

function numberAt(plant: Plant, path: string): string {
  const value = path
    .split('.')
    .reduce<unknown>(
      (node, step) => (node !== null && typeof node === 'object' ? (node as Record<string, unknown>)[step] : undefined),
      plant,
    );
  if (typeof value === 'number') return formatNumber(value, { decimals: Number.isInteger(value) ? 0 : 2 });
  return typeof value === 'string' ? value : MISSING;
}

const FORM_TO_PATH: Readonly<Record<string, string>> = {
  loadDeltaTF: 'design.loadDeltaTF',
  loadTons: 'design.loadTons',
  pumpFlowGpm: 'design.distributionPumps.flowGpm',
  pumpHeadFt: 'design.distributionPumps.headFt',
};

function assumedText(plant: Plant, field: string): string | undefined {
  const path = FORM_TO_PATH[field] ?? field.replace(/^units\./, 'design.productionUnits.');
  return plant.assumed.includes(path) ? `${numberAt(plant, path)} assumed` : undefined;
}
