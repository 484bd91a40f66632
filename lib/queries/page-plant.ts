import 'server-only';
import { notFound } from 'next/navigation';
import { cache } from 'react';
import { z } from 'zod';
import type { Access } from '../auth/access';
import { ACTIONS, can, type Action } from '../auth/can';
import { requireAccess, withAccess } from '../auth/current';
import { readPlant, type PlantRecord } from './plant-record';

export interface PagePlant {
  access: Access;
  plant: PlantRecord;
  /** What this person may do here: a control they may not use is absent. */
  may: Record<Action, boolean>;
}

/** The plant a page is about, or the not-found page: another organization's plant does not exist here. Read once a render. */
export const pagePlant = async (params: Promise<{ plantId: string }>): Promise<PagePlant> =>
  readPagePlant((await params).plantId);

const readPagePlant = cache(async (plantId: string): Promise<PagePlant> => {
  const access = await requireAccess();
  if (!z.uuid().safeParse(plantId).success) notFound();
  const plant = await withAccess(access, async (em) => {
    for (const organizationId of access.organizationIds) {
      const found = await readPlant(em, { organizationId, plantId });
      if (found) return found;
    }
    return null;
  });
  if (!plant) notFound();
  const may = Object.fromEntries(
    ACTIONS.map((action) => [action, can(access, plant.organizationId, action)]),
  ) as Record<Action, boolean>;
  return { access, plant, may };
});
