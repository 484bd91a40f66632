import { RateLimiterPostgres, RateLimiterRes } from 'rate-limiter-flexible';
import { orm } from '../db/orm';
import { problem, type ProblemError } from './problem';

/** Failed or attempted calls within a window of seconds. */
interface Rule {
  points: number;
  seconds: number;
}
export const RATE_RULES = {
  /** Wrong passwords for one address from one place. */
  'sign-in': { points: 5, seconds: 15 * 60 },
  /** Wrong passwords for one address from anywhere: a guesser who changes place gains little. */
  'sign-in-address': { points: 50, seconds: 24 * 3600 },
  /** Wrong passwords from one place for any address. */
  'sign-in-place': { points: 60, seconds: 3600 },
  'sign-up-address': { points: 5, seconds: 3600 },
  'sign-up-place': { points: 20, seconds: 3600 },
} as const satisfies Record<string, Rule>;
export type RateRule = keyof typeof RATE_RULES;

const made = new Map<RateRule, { client: unknown; limiter: RateLimiterPostgres }>();

async function limiter(rule: RateRule): Promise<RateLimiterPostgres> {
  const client: unknown = (await orm()).em.getConnection().getKnex();
  const known = made.get(rule);
  if (known && known.client === client) return known.limiter;
  const { points, seconds } = RATE_RULES[rule];
  const fresh = new RateLimiterPostgres({
    storeClient: client,
    storeType: 'knex',
    tableName: 'rate_limit',
    tableCreated: true,
    keyPrefix: rule,
    points,
    duration: seconds,
  });
  made.set(rule, { client, limiter: fresh });
  return fresh;
}

/** Counts one call against the rule; throws 429 with Retry-After when it is one too many. Returns how many are left. */
export async function countCall(rule: RateRule, key: string): Promise<number> {
  try {
    return (await (await limiter(rule)).consume(key)).remainingPoints;
  } catch (refusal) {
    if (refusal instanceof RateLimiterRes) throw tooMany(refusal.msBeforeNext);
    throw refusal;
  }
}

/** Forgets what was counted for this key: the right password was given. */
export async function forgetCalls(rule: RateRule, key: string): Promise<void> {
  await (await limiter(rule)).delete(key);
}

/** Takes one counted call back: it did no harm. */
export async function takeBack(rule: RateRule, key: string): Promise<void> {
  await (await limiter(rule)).reward(key);
}

function tooMany(msBeforeNext: number): ProblemError {
  const seconds = Math.max(1, Math.ceil(msBeforeNext / 1000));
  const wait = seconds < 90 ? `${seconds} seconds` : `${Math.ceil(seconds / 60)} minutes`;
  return problem(429, 'Too many tries', `Too many tries. Try again in ${wait}.`, undefined, {
    headers: { 'retry-after': String(seconds) },
    members: { triesLeft: 0 },
  });
}

/**
 * The address a request comes from, as far as headers tell: the last entry of X-Forwarded-For, which is the one our own proxy (or,
 * without a proxy, the server itself) wrote.
 */
export function placeOf(request: Request): string {
  const forwarded = request.headers.get('x-forwarded-for')?.split(',').at(-1)?.trim();
  return forwarded === undefined || forwarded === '' ? 'unknown' : forwarded.slice(0, 64);
}
