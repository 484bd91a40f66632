import { log } from '../log';
import { problem, type ProblemError } from './problem';

/** Connection refused or lost, the server shutting down or starting (PostgreSQL class 08 and 57P). */
const AWAY = /^(ECONNREFUSED|ECONNRESET|ENOTFOUND|ETIMEDOUT|EPIPE|08\w{3}|57P\d\d)$/;

/** What an unexpected error becomes for the one who asked: nothing of the inside, and the id to find it in the log by. */
export function failureProblem(error: unknown, requestId: string): ProblemError {
  log.error({ requestId, err: error }, 'request.failed');
  if (isDatabaseAway(error)) {
    return problem(503, 'Not available', 'The database does not answer at the moment. Try again shortly.', undefined, {
      headers: { 'retry-after': '5' },
    });
  }
  return problem(
    500,
    'Internal error',
    `Something went wrong on our side. Give this number when you report it: ${requestId}`,
  );
}

function isDatabaseAway(error: unknown): boolean {
  for (let at: unknown = error, depth = 0; at instanceof Error && depth < 5; at = at.cause, depth++) {
    if ('code' in at && typeof at.code === 'string' && AWAY.test(at.code)) return true;
    if (at instanceof AggregateError && at.errors.some(isDatabaseAway)) return true;
  }
  return false;
}
