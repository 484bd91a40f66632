import pino from 'pino';

/** A level nobody knows falls back to `info` here: readEnv names the bad variable in a sentence, and needs a process that lives. */
const levelAsked = (level = 'info'): string => (level === 'silent' || level in pino.levels.values ? level : 'info');

/**
 * The process's one logger. Event names are `noun.verb` with fields, always `requestId` or `jobId`; never a token, a password,
 * an address list or file content. `LOG_LEVEL` chooses the level.
 */
export const log = pino({
  level: levelAsked(process.env.LOG_LEVEL),
  base: undefined,
  timestamp: pino.stdTimeFunctions.isoTime,
  // A net under the rule above, for objects logged by mistake.
  redact: {
    paths: ['password', 'token', 'cookie', 'authorization', '*.password', '*.token', '*.cookie', '*.authorization'],
  },
});
