import { hash, verify } from '@node-rs/argon2';

/** argon2id with the library's defaults: 19 MiB, 2 passes, 1 lane (the OWASP password storage cheat sheet's first choice). */
export const hashPassword = (password: string): Promise<string> => hash(password);

// Of a random string nobody knows: verified when the address is unknown, so that the answer takes as long as for a known one.
let decoy: Promise<string> | undefined;

/** True when the password fits; false for an unknown person (`storedHash` null), after the same work. */
export async function passwordFits(storedHash: string | null, password: string): Promise<boolean> {
  decoy ??= hash(crypto.randomUUID());
  const fits = await verify(storedHash ?? (await decoy), password);
  return fits && storedHash !== null;
}
