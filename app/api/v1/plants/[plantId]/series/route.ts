import { cached } from '@/lib/http/etag';
import { requirePlant, route } from '@/lib/http/route';
import { resolvePeriod } from '@/lib/queries/period';
import { readSeries } from '@/lib/queries/read-series';
import { seriesInSi } from '@/lib/queries/series-units';
import { PlantParams } from '@/lib/schemas/common';
import { SeriesQuery } from '@/lib/schemas/results';

/** GET: chart data of points and results, thinned to the width of the chart. */
export const GET = route(
  { params: PlantParams, query: SeriesQuery },
  async ({ em, access, params, query, request }) => {
    const plant = await requirePlant(em, access, params.plantId, 'plant.read');
    return cached(request, plant, async () => {
      const { series, sources } = await readSeries(em, plant, resolvePeriod(query, plant), query);
      return query.units === 'si' ? seriesInSi(series, sources) : series;
    });
  },
);
