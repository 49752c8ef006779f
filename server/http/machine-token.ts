import { createHash } from 'node:crypto';
import type { Request, RequestHandler } from 'express';
import rateLimit, { ipKeyGenerator } from 'express-rate-limit';
import type { Dependencies } from '../dependencies.ts';
import { MachineToken } from '../entities/MachineToken.ts';
import { HttpError } from '../errors.ts';

/** Calls of one token within a minute; a census every second is more than any site sends. */
export const tokenCallsAMinute = 60;
/** Calls within a minute of one address with tokens that are none of ours; its good tokens are not held back by them. */
export const refusedTokensAMinute = 30;

const recognised = new WeakMap<Request, MachineToken | null>();

/** What is stored of a token's secret, and what it is found by. */
export function hashSecret(secret: string): string {
  return createHash('sha256').update(secret).digest('hex');
}

/** The token that a request came with; null if that is unknown or revoked, undefined if it came with none. */
export function tokenOf(req: Request): MachineToken | null | undefined {
  return recognised.get(req);
}

/**
 * Recognises the machine token of an `Authorization: Bearer` header (RFC 6750, 2.1) and limits how often one may call. Who
 * may do what is not decided here. Requests without the header, people's, are not concerned.
 */
export function recogniseTokens(deps: Dependencies): RequestHandler[] {
  return [
    async (req, _res, next) => {
      const secret = /^bearer +(.*?) *$/i.exec(req.headers.authorization ?? '')?.[1];
      if (secret !== undefined) {
        const token = await deps.database.read.findOneBy(MachineToken, { secretHash: hashSecret(secret) });
        recognised.set(req, token?.revokedAt === null ? token : null);
      }
      next();
    },
    rateLimit({
      windowMs: 60_000,
      standardHeaders: 'draft-8',
      legacyHeaders: false,
      validate: { xForwardedForHeader: false },
      skip: (req) => tokenOf(req) === undefined,
      keyGenerator: (req) => tokenOf(req)?.id ?? ipKeyGenerator(req.ip ?? ''),
      limit: (req) => (tokenOf(req) ? tokenCallsAMinute : refusedTokensAMinute),
      handler: (req, _res, next) => {
        const detail = tokenOf(req)
          ? `A machine token may call ${String(tokenCallsAMinute)} times a minute.`
          : 'Too many refused tokens from this address within a minute.';
        next(
          new HttpError(429, 'Too many requests', detail, {
            kept: 'Nothing was stored.',
            next: 'Wait a minute and try again.',
          }),
        );
      },
    }),
  ];
}
