import pino from 'pino';

/**
 * The process's one logger. Event names are `noun.verb` with fields, always `requestId` or `jobId`; never a token, a password,
 * an address list or file content. `LOG_LEVEL` chooses the level.
 */
export const log = pino({
  level: process.env.LOG_LEVEL ?? 'info',
  base: undefined,
  timestamp: pino.stdTimeFunctions.isoTime,
  // A net under the rule above, for objects logged by mistake.
  redact: {
    paths: ['password', 'token', 'cookie', 'authorization', '*.password', '*.token', '*.cookie', '*.authorization'],
  },
});
