import type { EntityManager } from '@mikro-orm/postgresql';
import { EpisodeEntity, PlantEntity, UploadEntity, type Episode, type Plant, type Upload } from '@/entities';
import type { Access } from '../auth/access';
import { can, type Action } from '../auth/can';
import { forbidden, notFound, problem } from './problem';

/** 403 when the person or token belongs to the organization and may not do this in it. */
export function requireAction(access: Access, organizationId: string, action: Action): void {
  if (!can(access, organizationId, action)) {
    throw forbidden(
      access.kind === 'token'
        ? `A token of scope "${access.scope}" may not do this.`
        : 'Your role in this organization may see this but not do it.',
    );
  }
}

/** The plant, found inside the asker's organizations: 404 for any other, 403 for a role that may see but not do. */
export async function requirePlant(em: EntityManager, access: Access, plantId: string, action: Action): Promise<Plant> {
  const outOfReach = access.onlyPlantId !== null && access.onlyPlantId !== plantId;
  const plant = outOfReach
    ? null
    : await em.findOne(PlantEntity, { id: plantId, organizationId: { $in: access.organizationIds }, deletedAt: null });
  if (!plant) throw notFound('plant');
  requireAction(access, plant.organizationId, action);
  return plant;
}

/** The upload, likewise; an `ingest` token sees the uploads it made itself. */
export async function requireUpload(
  em: EntityManager,
  access: Access,
  uploadId: string,
  action: Action,
): Promise<Upload> {
  const upload = await em.findOne(UploadEntity, {
    id: uploadId,
    organizationId: { $in: access.organizationIds },
    removedAt: null,
    ...(access.onlyPlantId === null ? {} : { plantId: access.onlyPlantId }),
    ...(access.scope === 'ingest' ? { createdByToken: access.tokenId } : {}),
  });
  const plant =
    upload &&
    (await em.findOne(PlantEntity, { id: upload.plantId, organizationId: upload.organizationId, deletedAt: null }));
  if (!upload || !plant) throw notFound('upload');
  requireAction(access, upload.organizationId, action);
  return upload;
}

/** The episode, likewise. */
export async function requireEpisode(
  em: EntityManager,
  access: Access,
  episodeId: string,
  action: Action,
): Promise<Episode> {
  const episode = await em.findOne(EpisodeEntity, {
    id: episodeId,
    organizationId: { $in: access.organizationIds },
    ...(access.onlyPlantId === null ? {} : { plantId: access.onlyPlantId }),
  });
  const { organizationId, plantId } = episode ?? {};
  const plant = plantId && (await em.findOne(PlantEntity, { id: plantId, organizationId, deletedAt: null }));
  if (!episode || !plant) throw notFound('episode');
  requireAction(access, episode.organizationId, action);
  return episode;
}

/** The organization a new object goes to: the one named, or the only one; 400 when it must be named. */
export function requireOrganization(access: Access, organizationId: string | undefined, action: Action): string {
  const only = access.organizationIds.length === 1 ? access.organizationIds[0] : undefined;
  const chosen = organizationId ?? only;
  if (chosen === undefined) {
    const message = 'You belong to several organizations: give organizationId.';
    throw problem(400, 'Invalid input', message, [{ path: 'organizationId', message }]);
  }
  if (!access.organizationIds.includes(chosen)) throw notFound('organization');
  requireAction(access, chosen, action);
  return chosen;
}
