import type { EntityManager } from '@mikro-orm/postgresql';
import type { Plant, Upload } from '@/entities';
import { readLayers, writeLayers, type PointDay } from '../db/blocks';
import { query } from '../db/sql';
import { withTenant } from '../db/tenant';
import { createTrendReader } from '../trends/reader';
import type { DayOfColumn, ReadReport, TrendProblem } from '../trends/types';
import { ensurePoints } from './ensure-points';
import type { DropPlan, FilePlan } from './import-plan';
import { readChunk } from './import-source';

/** Days kept open for rows that come out of order; what is older is written. Bounds the memory of a file of any length. */
const OPEN_DAYS = 40;

export interface ImportResult {
  rowsRead: number;
  samplesStored: number;
  fromMs: number | null;
  toMs: number | null;
  problems: TrendProblem[];
  days: string[];
}

/**
 * Reads the files of an upload chunk by chunk and writes their days as the upload's own layers, in short transactions, each
 * fenced. The upload has no layers when it is called, and nothing here counts until the upload is applied.
 */
export async function importSamples(
  upload: Upload,
  plant: Plant,
  plan: DropPlan,
  hooks: { signal: AbortSignal; fence: (em: EntityManager) => Promise<void> },
): Promise<ImportResult> {
  if (upload.uploadSeq == null) throw new Error(`importSamples: upload ${upload.id} has no sequence number`);
  const owner = {
    organizationId: plant.organizationId,
    plantId: plant.id,
    uploadSeq: upload.uploadSeq,
    stepMinutes: plan.stepMinutes,
  };
  const inTenant = <Result>(work: (em: EntityManager) => Promise<Result>) =>
    withTenant({ organizationIds: [owner.organizationId] }, async (em) => {
      await hooks.fence(em);
      return work(em);
    });

  const points = await inTenant((em) => ensurePoints(em, owner, plan.columns));

  const stored = new Set<string>();
  const write = async (file: FilePlan, days: readonly DayOfColumn[], rowsRead: number, progress: number) => {
    const incoming = days.flatMap((each): PointDay[] => {
      const pointId = points[file.columns[each.column] ?? -1];
      return pointId ? [{ pointId, day: each.day, values: each.values }] : [];
    });
    await inTenant(async (em) => {
      const again = new Set(
        incoming.filter((each) => stored.has(`${each.day}/${each.pointId}`)).map((each) => each.day),
      );
      if (again.size > 0) mergeInto(incoming, await readLayers(em, owner, [...again]));
      await writeLayers(em, owner, incoming);
      await query(em, `update upload set rows_read = $2, progress = $3 where id = $1`, [upload.id, rowsRead, progress]);
    });
    for (const each of incoming) stored.add(`${each.day}/${each.pointId}`);
  };

  const reports: ReadReport[] = [];
  let bytesRead = 0;
  let rowsBefore = 0;
  // The share of the bytes that has been read; the last tenth is for what follows.
  const totalBytes = plan.files.reduce((sum, { file }) => sum + file.sizeBytes, 0);
  const progress = () => (0.9 * bytesRead) / Math.max(1, totalBytes);
  for (const file of plan.files) {
    const reader = createTrendReader(file.plan);
    const chunkAt = (seq: number) => readChunk(owner.organizationId, upload.id, file.file.index, seq);
    // The database works while this process reads on: the next chunk is fetched and the last days are written meanwhile,
    // one of each at a time.
    let next = ahead(chunkAt(0));
    let written = Promise.resolve();
    try {
      for (let seq = 1; ; seq++) {
        hooks.signal.throwIfAborted();
        const chunk = await next;
        if (!chunk) break;
        next = ahead(chunkAt(seq));
        reader.push(chunk);
        bytesRead += chunk.length;
        const days = reader.takeOldestDays(OPEN_DAYS);
        await written;
        written = ahead(write(file, days, rowsBefore + reader.rowsRead, progress()));
        await new Promise((resolve) => setImmediate(resolve)); // lets the heartbeat through
      }
    } finally {
      // Also where reading stops in words: nothing of this attempt goes on behind it.
      await written;
    }
    await write(file, reader.finish(), rowsBefore + reader.rowsRead, progress());
    const report = reader.report();
    rowsBefore += report.rowsRead;
    reports.push(plan.files.length > 1 ? inFile(report, file.file.name) : report);
  }
  return { ...combineReports(reports), days: [...new Set([...stored].map((key) => key.slice(0, 10)))].sort() };
}

/** A promise that is awaited later: its failure is met there, not before. */
function ahead<Result>(promise: Promise<Result>): Promise<Result> {
  promise.catch(() => undefined);
  return promise;
}

/** Problems of a drop of several files say which file they are of. */
const inFile = (report: ReadReport, name: string): ReadReport => ({
  ...report,
  problems: report.problems.map((problem) => ({ ...problem, message: `"${name}": ${problem.message}` })),
});

/** A day that comes in parts: what the earlier part held stays where the later part has nothing. */
function mergeInto(incoming: readonly PointDay[], stored: readonly PointDay[]): void {
  for (const before of stored) {
    const now = incoming.find((each) => each.day === before.day && each.pointId === before.pointId);
    now?.values.forEach((value, slot) => {
      if (Number.isNaN(value)) now.values[slot] = before.values[slot] ?? NaN;
    });
  }
}

function combineReports(reports: readonly ReadReport[]): Omit<ImportResult, 'days'> {
  const least = (values: (number | null)[]) =>
    values.reduce((a, b) => (a === null ? b : b === null ? a : Math.min(a, b)), null);
  const greatest = (values: (number | null)[]) =>
    values.reduce((a, b) => (a === null ? b : b === null ? a : Math.max(a, b)), null);
  return {
    rowsRead: reports.reduce((sum, each) => sum + each.rowsRead, 0),
    samplesStored: reports.reduce((sum, each) => sum + each.samplesStored, 0),
    fromMs: least(reports.map((each) => each.fromMs)),
    toMs: greatest(reports.map((each) => each.toMs)),
    problems: reports.flatMap((each) => each.problems),
  };
}
