import { createHmac, timingSafeEqual } from 'node:crypto';
import type { RequestHandler } from 'express';
import { HttpError } from '../errors.ts';

/**
 * The anti-forgery token of a session: an HMAC of its id (OWASP's HMAC-based token pattern). Nothing
 * needs to be stored, and it changes with the session at sign-in.
 */
export function antiForgeryToken(secret: string, sessionId: string): string {
  return createHmac('sha256', secret).update(`anti-forgery ${sessionId}`).digest('base64url');
}

/** Refuses a writing request of a signed-in session that does not carry the session's token. */
export function requireAntiForgeryToken(secret: string): RequestHandler {
  return (req, _res, next) => {
    const writes = !['GET', 'HEAD', 'OPTIONS'].includes(req.method);
    // Without a signed-in person there is nothing to forge: the route answers 401 by itself.
    if (!writes || req.session.personId === undefined) {
      next();
      return;
    }
    const expected = Buffer.from(antiForgeryToken(secret, req.sessionID));
    const given = Buffer.from(req.get('x-csrf-token') ?? '');
    if (given.length === expected.length && timingSafeEqual(given, expected)) {
      next();
      return;
    }
    next(
      new HttpError(403, 'The session changed', 'Somebody signed in again on this device since the page was opened.', {
        kept: 'Nothing was stored.',
        next: 'Reload the page and try again. (A program sends the anti-forgery token of /api/session as x-csrf-token.)',
      }),
    );
  };
}
