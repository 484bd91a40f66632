import { createHash } from 'node:crypto';
import { userByEmail } from '../auth/doors';
import { lucia } from '../auth/lucia';
import { passwordFits } from '../auth/passwords';
import { withoutTenant } from '../db/tenant';
import { problem } from '../http/problem';
import { countCall, forgetCalls, takeBack } from '../http/rate-limit';

/** Kept by hash: the table of counters is no list of addresses. */
const hashed = (text: string): string => createHash('sha256').update(text).digest('base64url');

/**
 * A session for the right password, as a Set-Cookie value. Every try is counted before the password is looked at, so that tries at
 * once count too; the right password takes its own count back. Throws 401 with the tries left, 429 when none is.
 */
export async function signIn({ email, password }: { email: string; password: string }, place: string): Promise<string> {
  const [pair, address] = [hashed(`${email}|${place}`), hashed(email)];
  // The narrowest first: tries that one place has used up must not use up the address's, or anyone could lock a person out.
  const triesLeft = await countCall('sign-in', pair);
  await countCall('sign-in-place', place);
  await countCall('sign-in-address', address);
  const user = await withoutTenant((em) => userByEmail(em, email));
  if (!(await passwordFits(user?.password_hash ?? null, password)) || !user) {
    const left = triesLeft === 1 ? '1 try left' : `${triesLeft === 0 ? 'no' : triesLeft} tries left`;
    throw problem(401, 'Not signed in', `The address or the password is not right; ${left}.`, undefined, {
      members: { triesLeft },
    });
  }
  await forgetCalls('sign-in', pair);
  await takeBack('sign-in-address', address);
  await takeBack('sign-in-place', place);
  // Sessions that ended by themselves are cleared away whenever someone comes in.
  await lucia().deleteExpiredSessions();
  const session = await lucia().createSession(user.id, {});
  return lucia().createSessionCookie(session.id).serialize();
}

/** Ends the session of a Cookie header, if it holds one; the answer's Set-Cookie empties the browser's. */
export async function signOut(cookieHeader: string): Promise<string> {
  const sessionId = lucia().readSessionCookie(cookieHeader);
  if (sessionId !== null && sessionId !== '') await lucia().invalidateSession(sessionId);
  return lucia().createBlankSessionCookie().serialize();
}
