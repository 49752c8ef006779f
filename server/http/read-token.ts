import { createHash } from 'node:crypto';
import type { Request } from 'express';
import type { Dependencies } from '../dependencies.ts';
import { MachineToken } from '../entities/MachineToken.ts';

/** `lastUsedAt` is moved on at most this often, so that every call does not write. */
const touchEverySeconds = 60;

/** What is stored of a token's secret, and what it is found by. */
export function hashSecret(secret: string): string {
  return createHash('sha256').update(secret).digest('hex');
}

/** The secret of an `Authorization: Bearer` header (RFC 6750, 2.1); null if there is none. */
export function bearerSecret(req: Request): string | null {
  const match = /^bearer +([A-Za-z0-9\-._~+/]+=*) *$/i.exec(req.headers.authorization ?? '');
  return match ? match[1] : null;
}

/** The machine token with this secret, if it was not revoked. */
export async function readToken(deps: Dependencies, secret: string, now: number): Promise<MachineToken | null> {
  const token = await deps.database.read.findOneBy(MachineToken, { secretHash: hashSecret(secret) });
  if (!token || token.revokedAt !== null) return null;
  if (token.lastUsedAt === null || token.lastUsedAt <= now - touchEverySeconds) {
    await deps.database.write((manager) => manager.update(MachineToken, { id: token.id }, { lastUsedAt: now }));
  }
  return token;
}
