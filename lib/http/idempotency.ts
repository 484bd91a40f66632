import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { withTenant } from '../db/tenant';
import {
  findKey,
  freeKey,
  hashOfBody,
  keyPlace,
  lockKey,
  putKey,
  settleKey,
  touchKey,
  type StoredAnswer,
} from './idempotency-store';
import { problem, type ProblemError } from './problem';
import { json } from './json';

/** A claim whose request has not given a sign of life for this long belongs to a process that died. */
const SILENT_SECONDS = 120;

const twin = (): ProblemError =>
  problem(409, 'Conflict', 'A request with this Idempotency-Key is still at work. Ask again shortly.', undefined, {
    headers: { 'retry-after': '2' },
  });

/** 422: the key was used with other content. */
export const otherBody = (): ProblemError =>
  problem(422, 'Other content', 'This Idempotency-Key was used with another body. Use a new key for a new request.');

const respond = (answer: StoredAnswer, replayed: boolean): Response =>
  json(answer.body ?? {}, answer.status, replayed ? { 'idempotency-replayed': 'true' } : {});

/**
 * Does `work` once for an Idempotency-Key, inside the transaction of `em`: a replay gets the stored answer, a concurrent twin 409,
 * another body 422. Without the header `work` is simply done. A failure stores nothing, so the key stays free.
 */
export async function idempotent(
  em: EntityManager,
  asked: { request: Request; organizationId: string; body: unknown },
  work: () => Promise<StoredAnswer>,
): Promise<Response> {
  const place = keyPlace(asked.request, asked.organizationId);
  if (!place) return respond(await work(), false);
  if (!(await lockKey(em, place))) throw twin();
  const bodyHash = hashOfBody(asked.body);
  const row = await findKey(em, place);
  if (row) {
    if (row.bodyHash !== bodyHash) throw otherBody();
    if (!row.answer) throw twin();
    return respond(row.answer, true);
  }
  const answer = await work();
  await em.flush();
  await putKey(em, place, bodyHash, answer);
  return respond(answer, false);
}

/** A key held across several transactions, for a body that is streamed. */
export type LongClaim =
  | {
      kind: 'claimed';
      /** Call at least once a minute while at work. */
      touch: () => Promise<void>;
      /** In the transaction that makes the work count. */
      settle: (em: EntityManager, bodyHash: string, answer: StoredAnswer) => Promise<void>;
      /** The work was given up: the key may be used again. */
      free: () => Promise<void>;
    }
  | {
      kind: 'replay';
      /** As given to settle(): compare with the body that came now and throw otherBody() when it differs. */
      bodyHash: string;
      response: () => Response;
    };

/** Claims the key of a streamed request, or finds its stored answer; null without the header. Throws 409 for a twin at work. */
export async function claimIdempotencyKey(
  access: Access,
  request: Request,
  organizationId: string,
): Promise<LongClaim | null> {
  const place = keyPlace(request, organizationId);
  if (!place) return null;
  return withTenant(access, async (em): Promise<LongClaim> => {
    await freeKey(em, place, SILENT_SECONDS);
    const row = await findKey(em, place);
    if (row?.answer) {
      const { answer, bodyHash } = { ...row, answer: row.answer };
      return { kind: 'replay', bodyHash, response: () => respond(answer, true) };
    }
    if (row || !(await putKey(em, place, '', null))) throw twin();
    return {
      kind: 'claimed',
      touch: () => withTenant(access, (inner) => touchKey(inner, place)),
      settle: (inner, bodyHash, answer) => settleKey(inner, place, bodyHash, answer),
      free: () => withTenant(access, (inner) => freeKey(inner, place)),
    };
  });
}
