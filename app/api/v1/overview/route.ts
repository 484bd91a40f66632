import { inUnits } from '@/lib/http/si-units';
import { forbidden, route } from '@/lib/http/route';
import { plantsOverview } from '@/lib/queries/plants-overview';
import { OverviewQuery } from '@/lib/schemas/overview';

/** GET: the asker's plants in the order in which to look at them, with their last seven days. */
export const GET = route({ query: OverviewQuery }, async ({ em, access, query }) => {
  if (access.scope === 'ingest') throw forbidden('A token of scope "ingest" uploads and reads its uploads only.');
  return inUnits(await plantsOverview(em, access, query, Date.now()), query.units);
});
