import { createHash } from 'node:crypto';
import type { z } from 'zod';
import { userByEmail } from '../auth/doors';
import { lucia } from '../auth/lucia';
import { hashPassword, passwordFits } from '../auth/passwords';
import { queryOne } from '../db/sql';
import { withoutTenant } from '../db/tenant';
import { forbidden, problem } from '../http/problem';
import { countCall } from '../http/rate-limit';
import type { CreateAccount } from '../schemas/session';

/** The operator of this installation may keep sign-up closed (SIGN_UP=off). */
export const signUpIsOpen = (): boolean => process.env.SIGN_UP?.trim() !== 'off';

export interface CreatedAccount {
  userId: string;
  /** Set-Cookie value: the person is signed in. */
  cookie: string;
  replayed: boolean;
}

/**
 * A person, their organization with them as owner, and a session. With `repeat` (the request carries an Idempotency-Key, and no
 * organization exists yet to keep it in) the same address, name of organization and password sign in to what the first request
 * made. Throws 403 when sign-up is closed, 409 for a known address, 429 beyond the rate.
 */
export async function createAccount(
  account: z.output<typeof CreateAccount>,
  place: string,
  repeat: boolean,
): Promise<CreatedAccount> {
  if (!signUpIsOpen()) throw forbidden('New accounts are switched off here. Ask the owner of your organization.');
  await countCall('sign-up-place', place);
  await countCall('sign-up-address', createHash('sha256').update(account.email).digest('base64url'));
  const hash = await hashPassword(account.password);
  const made = await withoutTenant((em) =>
    queryOne<{ user_id: string }>(em, `select user_id from auth_create_account($1, $2, $3, $4)`, [
      account.organizationName,
      account.name,
      account.email,
      hash,
    ]),
  ).catch((error: unknown) => {
    if (isUniqueViolation(error)) return null;
    throw error;
  });
  const userId = made?.user_id ?? (repeat ? await madeBefore(account) : null);
  if (userId === null) {
    const message = 'There is an account with this address already. Sign in with it.';
    throw problem(409, 'Conflict', message, [{ path: 'email', message }]);
  }
  const session = await lucia().createSession(userId, {});
  return { userId, cookie: lucia().createSessionCookie(session.id).serialize(), replayed: made === null };
}

const isUniqueViolation = (error: unknown): boolean =>
  error instanceof Error && 'code' in error && error.code === '23505';

async function madeBefore(account: z.output<typeof CreateAccount>): Promise<string | null> {
  const user = await withoutTenant((em) => userByEmail(em, account.email));
  if (!user || !(await passwordFits(user.password_hash, account.password))) return null;
  const known = await withoutTenant((em) =>
    queryOne(em, `select 1 from auth_memberships($1) where organization_name = $2 and role = 'owner'`, [
      user.id,
      account.organizationName,
    ]),
  );
  return known ? user.id : null;
}
