import { acknowledgeEpisode } from '@/lib/commands/acknowledge-episode';
import { inUnits } from '@/lib/http/si-units';
import { notFound, requireEpisode, route } from '@/lib/http/route';
import { readEpisode } from '@/lib/queries/episode-record';
import { EpisodeParams, PatchEpisode } from '@/lib/schemas/episode';
import { UnitsQuery } from '@/lib/schemas/plant-requests';

/** PATCH: acknowledges an episode, or takes that back, and keeps a note. */
export const PATCH = route(
  { params: EpisodeParams, query: UnitsQuery, body: PatchEpisode },
  async ({ em, access, params, query, body }) => {
    const { id, organizationId } = await requireEpisode(em, access, params.episodeId, 'episode.acknowledge');
    await acknowledgeEpisode(em, access, { id, organizationId }, body);
    const episode = await readEpisode(em, { organizationId, episodeId: id });
    if (!episode) throw notFound('episode');
    return inUnits(episode, query.units);
  },
);
