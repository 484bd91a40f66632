import { can } from '@/lib/auth/can';
import { createToken } from '@/lib/commands/create-token';
import { idempotent } from '@/lib/http/idempotency';
import { forbidden, notFound, requireOrganization, requirePlant, route } from '@/lib/http/route';
import { listTokens } from '@/lib/queries/list-tokens';
import { Paging } from '@/lib/schemas/common';
import { CreateToken } from '@/lib/schemas/session';

/** GET: the tokens of the organizations in which the asker may manage them. */
export const GET = route({ query: Paging }, async ({ em, access, query }) => {
  const managed = access.organizationIds.filter((id) => can(access, id, 'token.manage'));
  if (managed.length === 0) throw forbidden('Tokens are managed by owners and engineers.');
  return listTokens(em, managed, query);
});

/** POST: a new token, shown this once. */
export const POST = route({ body: CreateToken }, async ({ em, access, body, request }) => {
  const plant = body.plantId === undefined ? null : await requirePlant(em, access, body.plantId, 'token.manage');
  const organizationId = requireOrganization(access, body.organizationId ?? plant?.organizationId, 'token.manage');
  if (plant && plant.organizationId !== organizationId) throw notFound('plant');
  return idempotent(em, { request, organizationId, body }, async () => ({
    status: 201,
    body: await createToken(em, access, organizationId, body),
  }));
});
