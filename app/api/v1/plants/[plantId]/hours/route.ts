import { withTenant } from '@/lib/db/tenant';
import { csvResponse } from '@/lib/http/csv';
import { cached } from '@/lib/http/etag';
import { requirePlant, route } from '@/lib/http/route';
import { inUnits } from '@/lib/http/si-units';
import { downloadName } from '@/lib/queries/download-name';
import { hourCells, hourHeader } from '@/lib/queries/hour-record';
import { hoursWorkbook } from '@/lib/queries/hours-workbook';
import { resolvePeriod } from '@/lib/queries/period';
import { rankedHours, rankHours } from '@/lib/queries/rank-hours';
import { PlantParams } from '@/lib/schemas/common';
import { HoursQuery } from '@/lib/schemas/results';

/** GET: the plant's low delta-T hours, worst first; a download streams, so the handler holds no transaction across it. */
export const GET = route(
  { params: PlantParams, query: HoursQuery, transaction: false },
  async ({ access, params, query, request }) => {
    const plant = await withTenant(access, (em) => requirePlant(em, access, params.plantId, 'plant.read'));
    const period = resolvePeriod(query, plant);
    const asked = { organizationId: plant.organizationId, plantId: plant.id, period, ...query };
    return cached(request, plant, async () => {
      if (query.format === 'json') {
        return inUnits(await withTenant(access, (em) => rankHours(em, asked, query)), query.units);
      }
      const name = downloadName(plant, query.all ? 'hours' : 'low hours', period, query.format);
      return query.format === 'xlsx'
        ? hoursWorkbook(name, rankedHours(asked), query.units)
        : csvResponse(name, hourHeader(query.units), hourRows(asked, query.units));
    });
  },
);

async function* hourRows(asked: Parameters<typeof rankedHours>[0], units: 'ip' | 'si') {
  for await (const row of rankedHours(asked)) yield hourCells(row, units);
}
