import { MappingEntity, PlantSettingsEntity, type Plant, type Upload } from '@/entities';
import { withTenant } from '../db/tenant';
import { plantModelFromSettings } from '../hydronics/plant-model';
import { IGNORE_ROLE } from '../point-roles';
import { PlantSettings } from '../schemas/plant';
import { ConfirmMapping } from '../schemas/upload';
import { previewTrend } from '../trends/preview';
import { TrendError, type ReadPlan, type TrendPreview } from '../trends/types';
import type { Arrangement } from '../hydronics/types';
import { readChunk } from './import-source';

export interface ImportPlan {
  preview: TrendPreview;
  /** null while a person has to confirm the columns. */
  plan: ReadPlan | null;
}

/**
 * Looks at the head of every file of an upload and decides how to read it: by the mapping confirmed for it, by one remembered
 * for its heading, or (plan null) not before a person has confirmed the suggestion.
 *
 * Throws  TrendError, with a sentence for the person, when a file cannot be read at all.
 */
export async function planImport(upload: Upload, plant: Plant): Promise<ImportPlan> {
  const preview = await previewFiles(upload, plant);
  const answer = ConfirmMapping.safeParse(upload.confirmed ?? (await rememberedMapping(plant, preview.fingerprint)));
  if (!answer.success) return { preview, plan: null };
  const answered = new Map(answer.data.columns.map((column) => [column.column, column]));
  return {
    preview,
    plan: {
      dialect: preview.dialect,
      timestamp: answer.data.timestamp,
      timeZone: answer.data.timeZone,
      stepMinutes: plant.stepMinutes,
      columns: preview.columns.map(({ column }) => answered.get(column) ?? { column, role: IGNORE_ROLE, unit: null }),
    },
  };
}

/** The preview of the drop's first file, once every other file is known to share its heading. */
async function previewFiles(upload: Upload, plant: Plant): Promise<TrendPreview> {
  const hints = await previewHints(plant);
  let first: { name: string; preview: TrendPreview } | null = null;
  for (const [index, file] of upload.files.entries()) {
    const head = (await readChunk(plant.organizationId, upload.id, index, 0)) ?? new Uint8Array();
    const preview = inFile(upload.files.length > 1 ? file.name : null, () =>
      previewTrend(head, { ...hints, complete: file.sizeBytes <= head.length }),
    );
    if (first && preview.fingerprint !== first.preview.fingerprint) {
      throw new TrendError(
        'unsupported',
        `"${file.name}" has other headings than "${first.name}". The files of one drop must share their headings: drop these one at a time.`,
      );
    }
    first ??= { name: file.name, preview };
  }
  if (!first) throw new TrendError('empty', 'The upload holds no file. Choose a CSV file and send it again.');
  return first.preview;
}

function inFile<Result>(name: string | null, read: () => Result): Result {
  try {
    return read();
  } catch (error) {
    if (error instanceof TrendError && name !== null)
      throw new TrendError(error.code, `"${name}": ${error.message}`, error.row);
    throw error;
  }
}

async function previewHints(plant: Plant) {
  const { organizationId, id: plantId, settingsRevision: revision } = plant;
  const stored = await withTenant({ organizationIds: [organizationId] }, (em) =>
    em.findOneOrFail(PlantSettingsEntity, { organizationId, plantId, revision }),
  );
  const { model } = plantModelFromSettings(PlantSettings.parse(stored.settings), plant.arrangement as Arrangement);
  return {
    timeZone: plant.timeZone,
    unitCount: model.units.length,
    unitFlowGpm: model.units[0]?.flowGpm,
    productionSupplyF: model.productionSupplyF,
    plantStepMinutes: plant.stepMinutes,
  };
}

async function rememberedMapping(plant: Plant, fingerprint: string): Promise<unknown> {
  const { organizationId, id: plantId } = plant;
  const mapping = await withTenant({ organizationIds: [organizationId] }, (em) =>
    em.findOne(MappingEntity, { organizationId, plantId, fingerprint }),
  );
  return mapping?.confirmed ?? null;
}
