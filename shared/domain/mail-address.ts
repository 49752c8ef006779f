const atoms = /^[\p{L}\p{M}\p{N}!#$%&'*+/=?^_`{|}~-]+(?:\.[\p{L}\p{M}\p{N}!#$%&'*+/=?^_`{|}~-]+)*$/u;
const domainLabel = /^[\p{L}\p{M}\p{N}](?:[\p{L}\p{M}\p{N}-]*[\p{L}\p{M}\p{N}])?$/u;

/** Octets of a text in UTF-8, by which RFC 5321 counts. */
function octets(text: string): number {
  let count = 0;
  for (const character of text) {
    const code = character.codePointAt(0) ?? 0;
    count += code < 0x80 ? 1 : code < 0x800 ? 2 : code < 0x10000 ? 3 : 4;
  }
  return count;
}

/**
 * Reads one plain e-mail address, internationalised ones too (RFC 5321, 4.1.2; RFC 6531, 3.3), and writes it in one way:
 * without spaces around it, composed (NFC), the domain in small letters. Quoted local parts, comments, display names and
 * addresses of machines by number are not read: nobody's mail address needs them, and they are what injection is made of.
 * @returns null for what is no such address
 */
export function readMailAddress(text: string): string | null {
  const address = text.trim().normalize('NFC');
  const at = address.lastIndexOf('@');
  const local = address.slice(0, Math.max(0, at));
  const domain = address.slice(at + 1).toLowerCase();
  if (at < 1 || octets(address) > 254 || octets(local) > 64 || !atoms.test(local)) return null;
  const labels = domain.split('.');
  if (labels.length < 2 || labels.some((label) => octets(label) > 63 || !domainLabel.test(label))) return null;
  return /^\d+$/.test(labels[labels.length - 1]) ? null : `${local}@${domain}`;
}
