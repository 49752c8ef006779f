import { createHmac, timingSafeEqual } from 'node:crypto';

/** What a link in a mail may do without a sign-in. */
export type LinkPurpose = 'confirm' | 'unsubscribe';

/** A confirmation is asked for again after this; an address to unsubscribe works for good. */
export const confirmSeconds = 14 * 86_400;

/** Makes the secret part of a link: the recipient, when it was made, and a signature that nobody else can make. */
export function signLink(secret: string, purpose: LinkPurpose, recipientId: string, at: number): string {
  const stated = `${recipientId}.${at.toString(36)}`;
  return `${stated}.${signatureOf(secret, purpose, stated)}`;
}

/** Reads a link's secret part; null where it was not made here for this purpose. */
export function readLink(
  secret: string,
  purpose: LinkPurpose,
  text: string,
): { recipientId: string; at: number } | null {
  const parts = text.split('.');
  if (parts.length !== 3) return null;
  const [recipientId, at, signature] = parts;
  const expected = Buffer.from(signatureOf(secret, purpose, `${recipientId}.${at}`));
  const given = Buffer.from(signature);
  if (expected.length !== given.length || !timingSafeEqual(expected, given)) return null;
  return { recipientId, at: Number.parseInt(at, 36) };
}

function signatureOf(secret: string, purpose: LinkPurpose, stated: string): string {
  return createHmac('sha256', secret).update(`mail link ${purpose} ${stated}`).digest('base64url');
}
