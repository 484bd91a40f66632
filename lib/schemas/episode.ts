import { z } from 'zod';

export const EpisodeParams = z.object({ episodeId: z.uuid() });
export const PatchEpisode = z
  .object({
    acknowledged: z.boolean().optional(),
    /** null or an empty text takes the note away. */
    note: z.string().trim().max(2000, 'Keep the note within 2,000 characters.').nullable().optional(),
  })
  .refine((patch) => patch.acknowledged !== undefined || patch.note !== undefined, {
    error: 'Give acknowledged, note, or both.',
  });
