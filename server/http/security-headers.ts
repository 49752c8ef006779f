import { randomBytes } from 'node:crypto';
import type { RequestHandler, Response } from 'express';
import helmet from 'helmet';

/** The nonce of this reply, for the two elements of the page that need one. */
export function nonceOf(res: Response): string {
  return String(res.locals.nonce);
}

/** Headers of every reply. Scripts and styles only from ourselves or with this reply's nonce; no inline style attribute in markup. */
export function securityHeaders(production: boolean): RequestHandler[] {
  const nonceSource = (_req: unknown, res: unknown) => `'nonce-${nonceOf(res as Response)}'`;
  return [
    (_req, res, next) => {
      res.locals.nonce = randomBytes(16).toString('base64');
      next();
    },
    helmet({
      contentSecurityPolicy: {
        useDefaults: false,
        directives: {
          defaultSrc: ["'none'"],
          scriptSrc: ["'self'", nonceSource],
          styleSrc: ["'self'", nonceSource],
          styleSrcAttr: ["'none'"],
          imgSrc: ["'self'", 'data:'],
          fontSrc: ["'self'"],
          connectSrc: ["'self'"],
          frameSrc: ["'self'"],
          workerSrc: ["'self'"],
          objectSrc: ["'none'"],
          manifestSrc: ["'self'"],
          formAction: ["'self'"],
          frameAncestors: ["'none'"],
          baseUri: ["'none'"],
        },
      },
      strictTransportSecurity: production ? { maxAge: 31_536_000 } : false,
      referrerPolicy: { policy: 'no-referrer' },
    }),
  ];
}
