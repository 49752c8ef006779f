/** What could identify a patient, in the words a refusal uses. */
export const identifierKinds = [
  'name',
  'date of birth',
  'record number',
  'insurance number',
  'national patient number',
  'telephone number',
  'e-mail address',
  'postal address',
  'postcode',
  'web address',
  'IP address',
  'free text',
] as const;
export type IdentifierKind = (typeof identifierKinds)[number];

/** A kind within a sentence: "a postcode", "an e-mail address", "free text". */
export function withArticle(kind: IdentifierKind): string {
  if (kind === 'free text') return kind;
  return `${/^[aeiI]/.test(kind) ? 'an' : 'a'} ${kind}`;
}
