import { pino, stdSerializers, type DestinationStream, type Logger } from 'pino';
import type { Config } from './config.ts';

export type { Logger };

/** An error as the log has it: what it is, what it says and where, and nothing that it carries (values of rows, say). */
export function presentError(error: Error): Record<string, unknown> {
  const { type, message, stack } = stdSerializers.err(error);
  const code = 'code' in error && typeof error.code === 'string' ? { code: error.code } : {};
  return { type, message, ...code, stack };
}

/** The path of a request as the log has it: without the query, which may hold a secret or a file's name, and without the signed link of a mail. */
export function loggedPath(url: string): string {
  return url.split('?')[0].replace(/^(\/mail\/[a-z]+\/).+/, '$1:link');
}

/**
 * Structured logs on standard output. Cookies, tokens, bodies and values of rows never reach them.
 * @param destination instead of standard output
 */
export function makeLogger(level: Config['logLevel'], destination?: DestinationStream): Logger {
  const options = {
    level,
    base: null,
    timestamp: pino.stdTimeFunctions.isoTime,
    serializers: { err: presentError },
    redact: [
      'req.headers.cookie',
      'req.headers.authorization',
      'req.headers["x-csrf-token"]',
      'res.headers["set-cookie"]',
    ],
  };
  return destination ? pino(options, destination) : pino(options);
}
