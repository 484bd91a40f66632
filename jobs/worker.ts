import { checkDatabase } from '@/lib/db/boot-check';
import { closeOrm, configureOrm } from '@/lib/db/orm';
import { readEnv } from '@/lib/env';
import { log } from '@/lib/log';
import { analysePlant } from './analyse-plant.job';
import { dailyAlert } from './daily-alert.job';
import { importUpload } from './import-upload.job';
import { WorkerProgram } from './worker-program';

const env = readEnv('worker');
configureOrm(env.DATABASE_WORKER_URL, 6);
await checkDatabase();
const worker = new WorkerProgram(env.DATABASE_WORKER_URL, [importUpload, analysePlant, dailyAlert(env)]);
await worker.start();

let stopping = false;
const stop = async (signal: string) => {
  if (stopping) return;
  stopping = true;
  log.info({ signal }, 'worker.stopping');
  await worker.stop();
  await closeOrm();
  process.exit(0);
};
process.on('SIGTERM', (signal) => void stop(signal));
process.on('SIGINT', (signal) => void stop(signal));
