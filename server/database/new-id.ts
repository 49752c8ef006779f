import { randomBytes } from 'node:crypto';

/** A random id of 96 bits, safe in a URL. */
export function newId(): string {
  return randomBytes(12).toString('base64url');
}
