import { pino, type Logger } from 'pino';
import type { Config } from './config.ts';

export type { Logger };

/** Structured logs on standard output. Cookies, tokens and bodies never reach them. */
export function makeLogger(level: Config['logLevel']): Logger {
  return pino({
    level,
    base: null,
    timestamp: pino.stdTimeFunctions.isoTime,
    redact: [
      'req.headers.cookie',
      'req.headers.authorization',
      'req.headers["x-csrf-token"]',
      'res.headers["set-cookie"]',
    ],
  });
}
