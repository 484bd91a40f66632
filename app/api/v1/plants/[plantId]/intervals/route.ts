import { withTenant } from '@/lib/db/tenant';
import { csvResponse } from '@/lib/http/csv';
import { cached } from '@/lib/http/etag';
import { requirePlant, route } from '@/lib/http/route';
import { inUnits } from '@/lib/http/si-units';
import { downloadName } from '@/lib/queries/download-name';
import { intervalCells, intervalHeader, listIntervals } from '@/lib/queries/interval-rows';
import { resolvePeriod } from '@/lib/queries/period';
import { PlantParams } from '@/lib/schemas/common';
import { IntervalsQuery } from '@/lib/schemas/results';

/** GET: one row an interval. The CSV streams in short transactions, so the handler holds none across it. */
export const GET = route(
  { params: PlantParams, query: IntervalsQuery, transaction: false },
  async ({ access, params, query, request }) => {
    const plant = await withTenant(access, (em) => requirePlant(em, access, params.plantId, 'plant.read'));
    const owner = { organizationId: plant.organizationId, plantId: plant.id };
    const period = resolvePeriod(query, plant);
    return cached(request, plant, async () => {
      if (query.format === 'csv') {
        const name = downloadName(plant, 'intervals', period, 'csv');
        return csvResponse(name, intervalHeader(query.units), intervalCells(owner, period, query.units));
      }
      return inUnits(await withTenant(access, (em) => listIntervals(em, owner, period, query)), query.units);
    });
  },
);
