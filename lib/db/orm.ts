import { MikroORM } from '@mikro-orm/postgresql';
import { ormConfig } from './orm-config';

interface Slot {
  url?: string;
  poolMax?: number;
  opening?: Promise<MikroORM>;
}

// Next.js evaluates modules once for pages and again for route handlers: one slot on the global object serves both.
const holder = globalThis as typeof globalThis & { slackwaterOrm?: Slot };
const slot: Slot = (holder.slackwaterOrm ??= {});

/** Says which database this process talks to; called once at boot, before the first query. */
export function configureOrm(url: string, poolMax = 10): void {
  if (slot.opening && slot.url !== url) throw new Error('configureOrm: the database is open already; close it first.');
  slot.url = url;
  slot.poolMax = poolMax;
}

/** The process's one ORM, opened at the first call. */
export async function orm(): Promise<MikroORM> {
  const { url } = slot;
  if (url === undefined) throw new Error('configureOrm() has not been called: no database is known.');
  slot.opening ??= MikroORM.init(ormConfig(url, slot.poolMax)).catch((error: unknown) => {
    // A database that was down at the first call must not stay down for the life of the process.
    delete slot.opening;
    throw error;
  });
  return slot.opening;
}

export async function closeOrm(): Promise<void> {
  const { opening } = slot;
  delete slot.opening;
  if (opening) await (await opening).close(true);
}
