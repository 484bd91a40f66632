import { queryOptions } from '@tanstack/react-query';
import type { z } from 'zod';
import { listOf } from '../schemas/common';
import { CreatedToken, Token } from '../schemas/session';
import { getJson, sendJson } from './api';

export type IngestToken = z.infer<typeof Token>;

/** The plant's tokens that may upload; for those who may manage tokens. */
export const ingestTokensQuery = (plantId: string) =>
  queryOptions({
    queryKey: ['plant', plantId, 'ingest-tokens'],
    queryFn: async ({ signal }): Promise<IngestToken[]> => {
      const { items } = await getJson('/tokens?limit=200', listOf(Token), signal);
      return items.filter((token) => token.scope === 'ingest' && token.plantId === plantId);
    },
  });

/** Makes a token that may upload to one plant; its text is in this answer and nowhere else. */
export const createIngestToken = async (plantId: string, name: string): Promise<z.infer<typeof CreatedToken>> =>
  CreatedToken.parse(await sendJson('POST', '/tokens', { plantId, name, scope: 'ingest' }));

export const revokeToken = (tokenId: string): Promise<unknown> => sendJson('DELETE', `/tokens/${tokenId}`);

/** Stands in the line until a token is made. */
export const TOKEN_PLACE = 'TOKEN';

/**
 * One line that uploads a file, as a shell of Linux, macOS or Windows takes it: double quotes alone, an exit code that tells a
 * scheduler of a refusal, and further tries when the network is down.
 */
export const curlLine = (origin: string, plantId: string, token: string | null): string =>
  `curl --fail-with-body --retry 5 --retry-connrefused -H "Authorization: Bearer ${token ?? TOKEN_PLACE}" -F "file=@export.csv" ${origin}/api/v1/plants/${plantId}/uploads`;
