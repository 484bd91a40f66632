import { createCipheriv, createDecipheriv, createHash, hkdfSync, randomBytes } from 'node:crypto';
import type { EntityManager } from '@mikro-orm/postgresql';
import { query, queryOne } from '../db/sql';
import { problem } from './problem';

/** One key's place: unique per organization, route and key. The key itself is kept by its hash. */
export interface KeyPlace {
  organizationId: string;
  route: string;
  key: string;
}
export interface StoredAnswer {
  status: number;
  body: unknown;
}

const sha256 = (text: string): string => createHash('sha256').update(text).digest('hex');
export const hashOfBody = (body: unknown): string => sha256(JSON.stringify(body ?? null));

/** The Idempotency-Key of a request at its route, or null when it has none. */
export function keyPlace(request: Request, organizationId: string): KeyPlace | null {
  const key = request.headers.get('idempotency-key');
  if (key === null) return null;
  if (!/^[\x21-\x7e]{1,255}$/.test(key)) {
    const message = 'Give an Idempotency-Key of 1 to 255 visible ASCII characters, such as a UUID.';
    throw problem(400, 'Invalid input', message, [{ path: 'Idempotency-Key', message }]);
  }
  return { organizationId, route: `${request.method} ${new URL(request.url).pathname}`, key };
}

export interface KeyRow {
  bodyHash: string;
  /** null while the first request is still at work. */
  answer: StoredAnswer | null;
}

/** The row of a key younger than 24 hours; older ones of the organization are removed on the way. */
export async function findKey(em: EntityManager, place: KeyPlace): Promise<KeyRow | null> {
  await query(
    em,
    `delete from idempotency_key where organization_id = $1 and created_at < now() - interval '24 hours'`,
    [place.organizationId],
  );
  const row = await queryOne<{ body_hash: string; status: number | null; response: { sealed: string } | null }>(
    em,
    `select body_hash, status, response from idempotency_key where organization_id = $1 and route = $2 and key = $3`,
    [place.organizationId, place.route, sha256(place.key)],
  );
  if (!row) return null;
  const answer =
    row.status === null || row.response === null
      ? null
      : { status: row.status, body: unseal(place.key, row.response.sealed) };
  return { bodyHash: row.body_hash, answer };
}

/** Writes a key's answer, or claims the key when `answer` is null. True when the row is new. */
export async function putKey(
  em: EntityManager,
  place: KeyPlace,
  bodyHash: string,
  answer: StoredAnswer | null,
): Promise<boolean> {
  const rows = await query(
    em,
    `insert into idempotency_key (organization_id, route, key, body_hash, status, response) values ($1, $2, $3, $4, $5, $6)
     on conflict do nothing returning 1`,
    [
      place.organizationId,
      place.route,
      sha256(place.key),
      bodyHash,
      answer?.status ?? null,
      answer && JSON.stringify({ sealed: seal(place.key, answer.body) }),
    ],
  );
  return rows.length === 1;
}

export async function settleKey(
  em: EntityManager,
  place: KeyPlace,
  bodyHash: string,
  answer: StoredAnswer,
): Promise<void> {
  await query(
    em,
    `update idempotency_key set body_hash = $4, status = $5, response = $6 where organization_id = $1 and route = $2 and key = $3`,
    [
      place.organizationId,
      place.route,
      sha256(place.key),
      bodyHash,
      answer.status,
      JSON.stringify({ sealed: seal(place.key, answer.body) }),
    ],
  );
}

/** Says that the request which claimed the key is still at work. */
export async function touchKey(em: EntityManager, place: KeyPlace): Promise<void> {
  await query(
    em,
    `update idempotency_key set created_at = now() where organization_id = $1 and route = $2 and key = $3 and status is null`,
    [place.organizationId, place.route, sha256(place.key)],
  );
}

/** Frees a claimed key; with `silentForSeconds` only when its request has given no sign of life for so long. */
export async function freeKey(em: EntityManager, place: KeyPlace, silentForSeconds = 0): Promise<void> {
  await query(
    em,
    `delete from idempotency_key where organization_id = $1 and route = $2 and key = $3 and status is null
       and created_at <= now() - $4 * interval '1 second'`,
    [place.organizationId, place.route, sha256(place.key), silentForSeconds],
  );
}

/** Held to the end of the transaction; false when a twin holds it. A process that dies lets it go by itself. */
export async function lockKey(em: EntityManager, place: KeyPlace): Promise<boolean> {
  const name = `idempotency/${place.organizationId}/${place.route}/${sha256(place.key)}`;
  const row = await queryOne<{ locked: boolean }>(
    em,
    `select pg_try_advisory_xact_lock(hashtextextended($1, 0)) as locked`,
    [name],
  );
  return row?.locked === true;
}

// An answer may hold what is shown once (a new token): it is sealed so that only whoever sends the key again can open it.
const sealingKey = (key: string): Buffer =>
  Buffer.from(hkdfSync('sha256', key, process.env.APP_SECRET ?? '', 'slackwater stored answer', 32));

function seal(key: string, body: unknown): string {
  const nonce = randomBytes(12);
  const cipher = createCipheriv('aes-256-gcm', sealingKey(key), nonce);
  const text = Buffer.concat([cipher.update(JSON.stringify(body ?? null), 'utf8'), cipher.final()]);
  return Buffer.concat([nonce, cipher.getAuthTag(), text]).toString('base64');
}

function unseal(key: string, sealed: string): unknown {
  const bytes = Buffer.from(sealed, 'base64');
  const decipher = createDecipheriv('aes-256-gcm', sealingKey(key), bytes.subarray(0, 12));
  decipher.setAuthTag(bytes.subarray(12, 28));
  return JSON.parse(Buffer.concat([decipher.update(bytes.subarray(28)), decipher.final()]).toString('utf8'));
}
