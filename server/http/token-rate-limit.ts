import type { Request, RequestHandler } from 'express';
import rateLimit, { ipKeyGenerator, type Options } from 'express-rate-limit';
import { HttpError } from '../errors.ts';
import { bearerSecret, hashSecret } from './read-token.ts';

/** Calls of one token within a minute; a census every second is more than any site sends. */
export const tokenCallsAMinute = 60;
/** Calls of one address within a minute that carried no token of ours. */
export const refusedTokensAMinute = 30;

const common: Partial<Options> = {
  windowMs: 60_000,
  standardHeaders: 'draft-8',
  legacyHeaders: false,
  validate: { xForwardedForHeader: false },
  skip: (req: Request) => bearerSecret(req) === null,
};

/** Limits what a machine token may ask, and how often an address may try tokens that are none. People are not concerned. */
export function limitTokens(): RequestHandler[] {
  return [
    rateLimit({
      ...common,
      limit: refusedTokensAMinute,
      keyGenerator: (req) => ipKeyGenerator(req.ip ?? ''),
      skipSuccessfulRequests: true,
      requestWasSuccessful: (_req, res) => res.statusCode !== 401,
      handler: (_req, _res, next) => {
        next(tooMany('Too many refused tokens from this address within a minute.'));
      },
    }),
    rateLimit({
      ...common,
      limit: tokenCallsAMinute,
      keyGenerator: (req) => hashSecret(bearerSecret(req) ?? ''),
      handler: (_req, _res, next) => {
        next(tooMany(`A machine token may call ${String(tokenCallsAMinute)} times a minute.`));
      },
    }),
  ];
}

function tooMany(detail: string): HttpError {
  return new HttpError(429, 'Too many requests', detail, {
    kept: 'Nothing was stored.',
    next: 'Wait a minute and try again.',
  });
}
