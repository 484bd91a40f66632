import { json, route } from '@/lib/http/route';
import { readiness } from '@/lib/queries/readiness';

/** GET: 200 when the database answers, migrations are current and a worker has been seen in the last minute, else 503. */
export const GET = route({ public: true, transaction: false, quiet: true }, async () => {
  const state = await readiness();
  return json(state, state.status === 'ready' ? 200 : 503, { 'cache-control': 'no-store' });
});
