import { resolveSession } from '@/lib/auth/resolve';
import { lucia } from '@/lib/auth/lucia';
import { createAccount } from '@/lib/commands/create-account';
import { placeOf } from '@/lib/http/rate-limit';
import { json, problem, route } from '@/lib/http/route';
import { meOf } from '@/lib/queries/read-me';
import { CreateAccount } from '@/lib/schemas/session';

/** POST: a person and their organization; signs them in. */
export const POST = route({ public: true, transaction: false, body: CreateAccount }, async ({ body, request }) => {
  const { cookie, replayed } = await createAccount(body, placeOf(request), request.headers.has('idempotency-key'));
  const { user, access } = await resolveSession(lucia().readSessionCookie(cookie) ?? '');
  if (!user || !access) throw problem(500, 'Internal error', 'The account was made; sign in with it.');
  return json(meOf(user, access), 201, {
    'set-cookie': cookie,
    ...(replayed ? { 'idempotency-replayed': 'true' } : {}),
  });
});
