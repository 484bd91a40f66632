import { createHash, randomBytes } from 'node:crypto';

/** SHA-256 as kept in the database: a token has 256 random bits, so a slow hash would add nothing. */
export const tokenHash = (token: string): Buffer => createHash('sha256').update(token).digest();

/** A new token; the prefix lets scanners of leaked secrets recognise it. */
export const newToken = (): string => `slw_${randomBytes(32).toString('base64url')}`;
