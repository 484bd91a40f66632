import { notFound, requirePlant, route } from '@/lib/http/route';
import { readAnalysis } from '@/lib/queries/read-analysis';
import { AnalysisParams } from '@/lib/schemas/data-requests';

/** GET: how far an analysis has come. */
export const GET = route({ params: AnalysisParams }, async ({ em, access, params }) => {
  const { organizationId, id } = await requirePlant(em, access, params.plantId, 'plant.read');
  const analysis = await readAnalysis(em, { organizationId, plantId: id, analysisId: params.analysisId });
  if (!analysis) throw notFound('analysis');
  return analysis;
});
