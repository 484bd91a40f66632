import { migrateDatabase } from '@/lib/db/migrate';
import { readEnv } from '@/lib/env';

const env = readEnv('migrate');
await migrateDatabase({ ownerUrl: env.DATABASE_URL, appUrl: env.DATABASE_APP_URL, workerUrl: env.DATABASE_WORKER_URL });
console.log('The database is at the present schema.');
