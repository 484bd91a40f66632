import { cached } from '@/lib/http/etag';
import { requirePlant, route } from '@/lib/http/route';
import { readHourDetail } from '@/lib/queries/hour-detail';
import { resolvePeriod } from '@/lib/queries/period';
import { HourPathParams, HourQuery } from '@/lib/schemas/data-requests';

/** GET: one hour in full. `from` and `to` say among which hours it is ranked; without them, among all the plant's. */
export const GET = route(
  { params: HourPathParams, query: HourQuery },
  async ({ em, access, params, query, request }) => {
    const plant = await requirePlant(em, access, params.plantId, 'plant.read');
    return cached(request, plant, () => {
      const among = query.from === undefined && query.to === undefined ? null : resolvePeriod(query, plant);
      return readHourDetail(em, plant, params.hourStart, query.units, among);
    });
  },
);
