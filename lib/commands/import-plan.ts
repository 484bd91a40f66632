import { PlantSettingsEntity, type Plant, type Upload } from '@/entities';
import { withTenant } from '../db/tenant';
import type { Arrangement } from '../hydronics/types';
import { plantModelFromSettings } from '../hydronics/plant-model';
import { IGNORE_ROLE } from '../point-roles';
import { PlantSettings } from '../schemas/plant';
import { ConfirmMapping, Preview } from '../schemas/upload';
import { PointScan, type ScannedPoint } from '../trends/point-scan';
import { previewDrop, type FileHead } from '../trends/preview';
import { recogniseFile, type FileTable } from '../trends/table';
import {
  TrendError,
  type ColumnMapping,
  type PreviewOptions,
  type ReadPlan,
  type TablePreview,
  type TimestampPlan,
  type TrendPreview,
} from '../trends/types';
import { readChunk } from './import-source';
import { recallMappings } from './recall-mappings';
import { textFiles, type TextFile } from './unpack-upload';

/** How one file of a drop is read, and where each of its columns stands among the drop's. */
export interface FilePlan {
  file: TextFile;
  plan: ReadPlan;
  /** By column of the plan: index into DropPlan.columns. */
  columns: number[];
}

export interface DropPlan {
  columns: ColumnMapping[];
  stepMinutes: number;
  files: FilePlan[];
}

export interface ImportPlan {
  preview: TrendPreview;
  /** What is confirmed, by a person for this upload or remembered for its headings; null while a person has to say. */
  confirmed: ConfirmMapping | null;
  plan: DropPlan | null;
}

/**
 * Looks at the head of every text file of an upload (and goes through the whole of those that have a row a reading) and decides
 * how to read them: by the mapping confirmed for the upload, by those remembered for its headings, or (plan null) not before a
 * person has confirmed the suggestion.
 *
 * Throws  TrendError, with a sentence for the person, when no file can be read at all.
 */
export async function planImport(upload: Upload, plant: Plant, signal: AbortSignal): Promise<ImportPlan> {
  const files = namedApart(textFiles(upload));
  const answer = ConfirmMapping.safeParse(upload.confirmed);
  const stored = Preview.safeParse(upload.preview);
  if (answer.success && stored.success) {
    const preview = { ...(upload.preview as unknown as TrendPreview) };
    return { preview, confirmed: answer.data, plan: dropPlan(preview, answer.data, files, plant.stepMinutes) };
  }
  const fresh = await previewFiles(upload, plant, files, signal);
  const { preview, confirmed } = await recallMappings(plant, fresh);
  return { preview, confirmed, plan: confirmed && dropPlan(preview, confirmed, files, plant.stepMinutes) };
}

/** Two files of one name in a drop are two files. */
function namedApart(files: readonly TextFile[]): TextFile[] {
  const taken = new Set<string>();
  return files.map((file) => {
    let { name } = file;
    for (let n = 2; taken.has(name); n++) name = `${file.name} (${n})`;
    taken.add(name);
    return { ...file, name };
  });
}

/** A confirmed mapping as a plan for each file: every file reads its table's columns under their own headings. */
function dropPlan(
  preview: TrendPreview,
  confirmed: ConfirmMapping,
  files: readonly TextFile[],
  stepMinutes: number,
): DropPlan {
  const answered = new Map(confirmed.columns.map((column) => [column.column, column]));
  const columns = preview.columns.map(({ column, sentinels }): ColumnMapping => {
    const answer = answered.get(column);
    return answer ? { ...answer, sentinels } : { column, role: IGNORE_ROLE, unit: null };
  });
  const place = new Map(columns.map(({ column }, index) => [column, index]));
  const plans = preview.tables.flatMap((table, index) => {
    const names = table.names.filter(({ column }) => place.has(column));
    const own = names.map(({ column }) => place.get(column) as number);
    const plan: ReadPlan = {
      shape: table.shape,
      dialect: table.dialect,
      timestamp: timestampOf(preview, confirmed, table, index),
      timeZone: confirmed.timeZone,
      columns: names.map(({ cell }, i) => ({ ...(columns[own[i] as number] as ColumnMapping), column: cell })),
      sourceStepMinutes: table.stepMinutes,
      stepMinutes,
    };
    const held = new Set(table.files);
    const mine = files.filter(({ name }) => held.has(name));
    return mine.map((file): FilePlan => ({ file, plan, columns: own }));
  });
  return { columns, stepMinutes, files: plans.sort((a, b) => a.file.index - b.file.index) };
}

/**
 * How a table's times are read: as said for it; where nothing other was said of it than suggested and the first table's were
 * changed, as those of the first, if both looked alike.
 */
export function timestampOf(
  preview: Pick<TrendPreview, 'timestamp'>,
  confirmed: ConfirmMapping,
  table: Pick<TablePreview, 'timestamp'>,
  index: number,
): TimestampPlan {
  if (index === 0) return confirmed.timestamp;
  const own = confirmed.tables?.[index]?.timestamp ?? table.timestamp;
  const follows = same(own, table.timestamp) && !same(confirmed.timestamp, preview.timestamp);
  const alike = table.timestamp.form === preview.timestamp.form;
  return follows && alike ? { ...confirmed.timestamp, columns: own.columns } : own;
}

const same = (a: TimestampPlan, b: TimestampPlan): boolean => JSON.stringify(a) === JSON.stringify(b);

async function previewFiles(
  upload: Upload,
  plant: Plant,
  files: readonly TextFile[],
  signal: AbortSignal,
): Promise<TrendPreview> {
  const hints = await previewHints(plant);
  const heads: FileHead[] = [];
  for (const file of files) {
    signal.throwIfAborted();
    const head = (await readChunk(plant.organizationId, upload.id, file.index, 0)) ?? new Uint8Array();
    const complete = file.sizeBytes <= head.length;
    const table = complete ? undefined : (tableOf(head, hints) ?? undefined);
    const points =
      table?.shape.kind === 'long' ? await scanPoints(upload, plant, file, head, table, signal) : undefined;
    heads.push({ name: file.name, head, complete, table, points });
  }
  return previewDrop(heads, { ...hints, complete: false });
}

/** The points of a file that has a row a reading, from all of it. */
async function scanPoints(
  upload: Upload,
  plant: Plant,
  file: TextFile,
  head: Uint8Array,
  table: FileTable,
  signal: AbortSignal,
): Promise<ScannedPoint[]> {
  const scan = new PointScan(table);
  scan.push(head);
  for (let seq = 1; ; seq++) {
    signal.throwIfAborted();
    const chunk = await readChunk(plant.organizationId, upload.id, file.index, seq);
    if (!chunk) return scan.finish();
    scan.push(chunk);
    await new Promise((resolve) => setImmediate(resolve)); // lets the heartbeat through
  }
}

function tableOf(head: Uint8Array, hints: Omit<PreviewOptions, 'complete'>) {
  try {
    return recogniseFile(head, { ...hints, complete: false });
  } catch (error) {
    // The preview says of every file why it cannot be read.
    if (error instanceof TrendError) return null;
    throw error;
  }
}

async function previewHints(plant: Plant): Promise<Omit<PreviewOptions, 'complete'>> {
  const { organizationId, id: plantId, settingsRevision: revision } = plant;
  const stored = await withTenant({ organizationIds: [organizationId] }, (em) =>
    em.findOneOrFail(PlantSettingsEntity, { organizationId, plantId, revision }),
  );
  const { model } = plantModelFromSettings(PlantSettings.parse(stored.settings), plant.arrangement as Arrangement);
  return {
    timeZone: plant.timeZone,
    nowMs: Date.now(),
    unitCount: model.units.length,
    unitFlowGpm: model.units[0]?.flowGpm,
    productionSupplyF: model.productionSupplyF,
    plantStepMinutes: plant.stepMinutes,
  };
}
