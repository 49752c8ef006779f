import { generateKeyPairSync, randomBytes } from 'node:crypto';
import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { JWK } from 'oidc-provider';
import { z } from 'zod';

const stored = z.object({
  cookieKeys: z.array(z.string().min(32)).min(1),
  signingKeys: z
    .array(z.looseObject({ kty: z.literal('RSA'), kid: z.string(), n: z.string(), e: z.string(), d: z.string() }))
    .min(1),
});

export interface OidcKeys {
  cookieKeys: string[];
  signingKeys: JWK[];
}

/**
 * The stand-in provider's keys, kept in `dataDir` between starts, so that a token given before a restart
 * still ends its session after it. Made on the first start and when the file cannot be read as keys.
 */
export function loadOidcKeys(dataDir: string): OidcKeys {
  const file = join(dataDir, 'stand-in-sign-in-keys.json');
  const found = stored.safeParse(readJson(file));
  if (found.success) return found.data;
  const keys: OidcKeys = { cookieKeys: [randomBytes(32).toString('base64url')], signingKeys: [makeSigningKey()] };
  mkdirSync(dataDir, { recursive: true });
  writeFileSync(file, JSON.stringify(keys), { mode: 0o600 });
  return keys;
}

function readJson(file: string): unknown {
  try {
    return JSON.parse(readFileSync(file, 'utf8'));
  } catch {
    return undefined;
  }
}

function makeSigningKey(): JWK {
  const { privateKey } = generateKeyPairSync('rsa', { modulusLength: 2048 });
  const key = privateKey.export({ format: 'jwk' });
  return { ...key, kty: 'RSA', kid: randomBytes(8).toString('hex'), use: 'sig', alg: 'RS256' };
}
