import { signIn, signOut } from '@/lib/commands/sign-in';
import { placeOf } from '@/lib/http/rate-limit';
import { route } from '@/lib/http/route';
import { SignIn } from '@/lib/schemas/session';

/** POST: signs in and sets the session cookie. */
export const POST = route({ public: true, transaction: false, body: SignIn }, async ({ body, request }) => {
  const cookie = await signIn(body, placeOf(request));
  return new Response(null, { status: 204, headers: { 'set-cookie': cookie } });
});

/** DELETE: signs out; being signed out already is no error. */
export const DELETE = route({ public: true, transaction: false }, async ({ request }) => {
  const cookie = await signOut(request.headers.get('cookie') ?? '');
  return new Response(null, { status: 204, headers: { 'set-cookie': cookie } });
});
