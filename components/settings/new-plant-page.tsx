'use client';
import { useQueryClient } from '@tanstack/react-query';
import { useRouter } from 'next/navigation';
import { useState } from 'react';
import { Page } from '@/components/shell/app-shell';
import { plantPath } from '@/components/shell/tabs';
import { PageHead } from '@/components/ui/page-head';
import { sendJson } from '@/lib/client/api';
import { overviewQuery } from '@/lib/client/queries';
import { Plant } from '@/lib/schemas/plant';
import { PlantFormFields } from './plant-form';
import { emptyForm, plantBody, type PlantFormOutput } from './plant-form-values';

/** A new plant: name, zone, set-point and units are enough. */
export function NewPlantPage({ organizations }: { organizations: readonly { id: string; name: string }[] }) {
  const router = useRouter();
  const queries = useQueryClient();
  const [start] = useState(() => emptyForm(organizations[0]?.id ?? '', 'America/New_York'));
  const create = async (form: PlantFormOutput) => {
    const plant = Plant.parse(
      await sendJson('POST', '/plants', { organizationId: form.organizationId, ...plantBody(form, 'create') }),
    );
    await queries.invalidateQueries({ queryKey: overviewQuery().queryKey });
    router.push(plantPath(plant.id, 'uploads'));
    router.refresh();
  };
  return (
    <Page>
      <PageHead
        title="Add a plant"
        lead="Name, zone, set-point and units are enough to begin; the rest is assumed until someone confirms it."
      />
      <PlantFormFields start={start} organizations={organizations} submitWord="Add the plant" onSave={create} />
    </Page>
  );
}
