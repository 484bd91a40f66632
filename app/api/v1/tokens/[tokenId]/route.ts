import { z } from 'zod';
import { revokeToken } from '@/lib/commands/revoke-token';
import { route } from '@/lib/http/route';

/** DELETE: revokes the token; it stops working at once. */
export const DELETE = route({ params: z.object({ tokenId: z.uuid() }) }, async ({ em, access, params }) => {
  await revokeToken(em, access, params.tokenId);
});
