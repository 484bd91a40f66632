import { checkDatabase } from '../db/boot-check';
import { configureOrm } from '../db/orm';
import { readEnv } from '../env';
import { log } from '../log';

/** Checks settings and database before the first request is served; ends the process with a sentence when they will not do. */
export async function bootWeb(): Promise<void> {
  try {
    const env = readEnv('web');
    configureOrm(env.DATABASE_APP_URL);
    await checkDatabase();
    log.info({ address: env.LINK_ORIGIN }, 'web.started');
  } catch (error) {
    // A sentence for whoever starts the program, not a log line.
    process.stderr.write(`${error instanceof Error ? error.message : String(error)}\n`);
    process.exit(1);
  }
}
