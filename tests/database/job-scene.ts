import { createHash } from 'node:crypto';
import { gzipSync } from 'node:zlib';
import { spawn, type ChildProcess } from 'node:child_process';
import pg from 'pg';
import { analysePlant } from '@/jobs/analyse-plant.job';
import { importUpload } from '@/jobs/import-upload.job';
import { WorkerProgram } from '@/jobs/worker-program';
import type { Access } from '@/lib/auth/access';
import { confirmMapping } from '@/lib/commands/confirm-mapping';
import { enqueue } from '@/lib/db/enqueue';
import { closeOrm, configureOrm } from '@/lib/db/orm';
import { withTenant } from '@/lib/db/tenant';
import { log } from '@/lib/log';
import { readPreview } from '@/lib/queries/read-preview';
import { ConfirmMapping, type PreviewColumn } from '@/lib/schemas/upload';
import { createTestDatabase } from '../support/database';

const CHUNK_BYTES = 1 << 20;

/** A plant with one-minute steps behind the worker's own role; the owner's connection arranges and looks. */
export interface JobScene {
  owner: pg.Client;
  workerUrl: string;
  organizationId: string;
  plantId: string;
  close: () => Promise<void>;
}

export async function setJobScene(): Promise<JobScene> {
  log.level = 'silent';
  const database = await createTestDatabase();
  const owner = new pg.Client({ connectionString: database.ownerUrl });
  await owner.connect();
  configureOrm(database.workerUrl);
  const one = async (text: string, values: unknown[]) =>
    (await owner.query<{ id: string }>(text, values)).rows[0]?.id ?? '';
  const organizationId = await one(`insert into organization (name) values ('Jobs') returning id`, []);
  const plantId = await one(
    `insert into plant (organization_id, name, time_zone, arrangement, step_minutes) values ($1, 'Plant', 'America/Denver', 'primary-secondary', 1) returning id`,
    [organizationId],
  );
  const unit = { tons: 450, flowGpm: 900 };
  const design = {
    productionSupplyF: 44,
    loadDeltaTF: 12,
    loadTons: 900,
    productionUnits: [
      { name: 'CH-1', ...unit },
      { name: 'CH-2', ...unit },
    ],
  };
  await owner.query(
    `insert into plant_settings (organization_id, plant_id, revision, settings) values ($1, $2, 1, $3)`,
    [organizationId, plantId, JSON.stringify({ design, tariff: { currency: 'USD', energyPerKwh: 0.14 } })],
  );
  return {
    owner,
    workerUrl: database.workerUrl,
    organizationId,
    plantId,
    close: async () => {
      await closeOrm();
      await owner.end();
      await database.drop();
    },
  };
}

export const startWorker = async (scene: JobScene): Promise<WorkerProgram> => {
  const worker = new WorkerProgram(scene.workerUrl, [importUpload, analysePlant]);
  await worker.start();
  return worker;
};

/** The worker program itself, in a process of its own that can be killed. */
export function spawnWorker(scene: JobScene): ChildProcess {
  return spawn(process.execPath, ['--import', 'tsx', 'jobs/worker.ts'], {
    stdio: 'ignore',
    env: {
      ...process.env,
      DATABASE_WORKER_URL: scene.workerUrl,
      LOCAL_FAKES: '1',
      APP_SECRET: 'a secret of at least thirty-two characters',
      LOG_LEVEL: 'silent',
    },
  });
}

/** Stores a file as received, under the next sequence number, and enqueues its import. Returns the upload's id. */
export async function receive(scene: JobScene, filename: string, content: string | Uint8Array): Promise<string> {
  const bytes = Buffer.from(content);
  const sha256 = createHash('sha256').update(bytes).digest('hex');
  const { rows } = await scene.owner.query<{ id: string }>(
    `with next as (update plant set next_upload_seq = next_upload_seq + 1 where id = $2 returning next_upload_seq - 1 as seq)
     insert into upload (organization_id, plant_id, upload_seq, filename, files, size_bytes, sha256, status)
     select $1, $2, seq, $3, $4, $5, $6, 'received' from next returning id`,
    [
      scene.organizationId,
      scene.plantId,
      filename,
      JSON.stringify([{ name: filename, sizeBytes: bytes.length, sha256, gzip: false }]),
      bytes.length,
      sha256,
    ],
  );
  const id = rows[0]?.id ?? '';
  for (let seq = 0; seq * CHUNK_BYTES < bytes.length; seq++) {
    const part = bytes.subarray(seq * CHUNK_BYTES, (seq + 1) * CHUNK_BYTES);
    await scene.owner.query(`insert into upload_chunk values ($1, $2, 0, $3, $4, $5)`, [
      scene.organizationId,
      id,
      seq,
      part.length,
      gzipSync(part, { level: 1 }),
    ]);
  }
  await enqueueImport(scene, id);
  return id;
}

export const enqueueImport = (scene: JobScene, uploadId: string): Promise<void> =>
  withTenant({ organizationIds: [scene.organizationId] }, (em) =>
    enqueue(em, 'import-upload', { organizationId: scene.organizationId, uploadId }),
  );

/** Confirms through the command itself, as the mapping page does, with the preview's columns changed as a test needs it. */
export async function confirmColumns(
  scene: JobScene,
  uploadId: string,
  change: (column: PreviewColumn) => Partial<PreviewColumn & { further: boolean }> = () => ({}),
): Promise<void> {
  const { organizationId, plantId } = scene;
  await withTenant({ organizationIds: [organizationId] }, async (em) => {
    const preview = await readPreview(em, { organizationId, uploadId });
    const { status } = await uploadState(scene, uploadId);
    const columns = preview.columns.map((column) => ({ ...column, ...change(column) }));
    const mapping = ConfirmMapping.parse({ ...preview, columns, remember: true });
    await confirmMapping(em, NOBODY, { id: uploadId, organizationId, plantId, status }, mapping);
  });
}

/** The points of other files that the mapping page asks about. */
export async function carriedOf(scene: JobScene, uploadId: string) {
  const { organizationId } = scene;
  return withTenant({ organizationIds: [organizationId] }, async (em) => {
    const { carried = [] } = await readPreview(em, { organizationId, uploadId });
    return carried;
  });
}

/** A worker's own hand: the command records who acted, and here nobody did. */
const NOBODY: Access = {
  kind: 'session',
  userId: null,
  tokenId: null,
  scope: 'session',
  ingestPlantId: null,
  onlyPlantId: null,
  memberships: [],
  organizationIds: [],
};

/** Confirms the suggestion as it stands, remembered or not, as the mapping page would. */
export async function confirmSuggestion(scene: JobScene, uploadId: string, remember = true): Promise<void> {
  await scene.owner.query(`update upload set confirmed = preview, status = 'received' where id = $1`, [uploadId]);
  if (remember) {
    await scene.owner.query(
      `insert into mapping (organization_id, plant_id, fingerprint, confirmed)
       select organization_id, plant_id, preview->>'fingerprint', preview from upload where id = $1`,
      [uploadId],
    );
  }
  await enqueueImport(scene, uploadId);
}

export interface UploadState {
  status: string;
  rows_read: number;
  samples_stored: number;
  applied: boolean;
  problems: { code: string; severity: string; message: string; row?: number }[];
}

export async function uploadState(scene: JobScene, id: string): Promise<UploadState> {
  const { rows } = await scene.owner.query<UploadState>(
    `select status, rows_read::integer, samples_stored::integer, applied, problems from upload where id = $1`,
    [id],
  );
  if (!rows[0]) throw new Error(`no upload ${id}`);
  return rows[0];
}

/** Waits for a condition, looking ten times a second; says what it saw last when it never came. */
export async function until<Seen>(
  look: () => Promise<Seen>,
  holds: (seen: Seen) => boolean,
  timeoutMs = 45_000,
): Promise<Seen> {
  const deadline = Date.now() + timeoutMs;
  for (;;) {
    const seen = await look();
    if (holds(seen)) return seen;
    if (Date.now() > deadline) throw new Error(`gave up waiting; last seen ${JSON.stringify(seen)}`);
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
}

export const untilStatus = (scene: JobScene, id: string, ...statuses: string[]): Promise<UploadState> =>
  until(
    () => uploadState(scene, id),
    ({ status }) => statuses.includes(status),
  );

/** The stored blocks, condensed to what a comparison needs. */
export async function blocksOf(scene: JobScene): Promise<{ days: number; values: number; hash: string }> {
  const { rows } = await scene.owner.query<{ days: number; values: number; hash: string }>(
    `select count(distinct b.day)::integer as days, coalesce(sum((select count(*) from unnest(b.v) x where x <> 'NaN')), 0)::integer as values,
       md5(coalesce(string_agg(p.role || b.day || md5(b.v::text), ',' order by p.role, b.day), '')) as hash
     from sample_block b join point p on p.id = b.point_id where b.plant_id = $1`,
    [scene.plantId],
  );
  return rows[0] ?? { days: 0, values: 0, hash: '' };
}

const HEADING = 'Timestamp,P Sup T (F),S Sup T (F),S Ret T (F),P Ret T (F),P Flow gpm,S Flow gpm';

/** One-minute record of a plant that runs backwards from noon to six and forward otherwise; exact balances, no noise. */
export function record(firstDay: string, days: number, shiftF = 0): string {
  const start = Date.parse(`${firstDay}T00:00:00Z`);
  const rows = [HEADING];
  for (let minute = 0; minute < days * 1440; minute++) {
    const hour = (minute % 1440) / 60;
    const reverse = hour >= 12 && hour < 18;
    const [fp, fs, tps, tsr] = [900, reverse ? 1200 : 700, 44 + shiftF, 56 + shiftF];
    const tss = reverse ? (fp * tps + (fs - fp) * tsr) / fs : tps;
    const tpr = reverse ? tsr : (fs * tsr + (fp - fs) * tps) / fp;
    const stamp = new Date(start + minute * 60_000).toISOString();
    rows.push([stamp, tps.toFixed(2), tss.toFixed(2), tsr.toFixed(2), tpr.toFixed(2), fp, fs].join(','));
  }
  return rows.join('\n') + '\n';
}
