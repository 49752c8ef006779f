import type { RequestHandler } from 'express';
import rateLimit, { ipKeyGenerator } from 'express-rate-limit';
import { HttpError } from '../errors.ts';
import { tokenOf } from './machine-token.ts';

/**
 * Limits how often one session may ask, so that a hospital behind one address is not one caller. Signed out, where
 * there is little to ask for, the address counts, for twenty at once. Machine tokens have a limit of their own.
 */
export function limitRequests(perMinute: number): RequestHandler {
  return rateLimit({
    windowMs: 60_000,
    standardHeaders: 'draft-8',
    legacyHeaders: false,
    validate: { xForwardedForHeader: false },
    skip: (req) => tokenOf(req) !== undefined,
    keyGenerator: (req) =>
      req.session.personId === undefined ? `address ${ipKeyGenerator(req.ip ?? '')}` : `session ${req.sessionID}`,
    limit: (req) => (req.session.personId === undefined ? perMinute * 20 : perMinute),
    handler: (_req, _res, next) => {
      next(
        new HttpError(429, 'Too many requests', 'More was asked within a minute than a person can.', {
          kept: 'Nothing was stored.',
          next: 'Wait a minute and try again.',
        }),
      );
    },
  });
}
