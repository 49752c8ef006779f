import { findIdentifier } from './find-identifier.ts';
import type { IdentifierKind } from './identifier-kind.ts';

/** Words that say that a name, number or code belongs to a place or an event and not to a person. */
const ofAPlace =
  /\b(?:area|ward|unit|zone|site|hospital|department|dept|location|room|bay|bed|clinic|team|stream|facility|specialty|disposition|disposal|outcome|destination|mode|column)\b/;

const rules: readonly [RegExp, IdentifierKind, unlessPlace?: true][] = [
  [/\b(?:dob|d o b|birth|birthdate|birthday|born|geburtsdatum|naissance|yob|year of birth)\b/, 'date of birth'],
  [
    /\b(?:nhs|chi|nhi|hsn|ihi|phn|bsn|pesel|personnummer|fodselsnummer|cpr|cpf|nir|nino|aadhaar)\b/,
    'national patient number',
  ],
  [/\bnational (?:id|patient|health|identifier|number)\b/, 'national patient number'],
  [
    /\b(?:ssn|social security|insurance|insurer|policy|medicare|medicaid|member (?:id|no|number)|payer|payor)\b/,
    'insurance number',
  ],
  [
    /\b(?:mrn|urn|uhid|empi|chart|accession|pid|subject id|spell (?:id|no|number)|record (?:id|no|number)|medical record|case (?:id|no|number)|csn)\b/,
    'record number',
  ],
  [
    /\b(?:patient|person|pt|pat|encounter|visit|attendance|episode|hospital|hosp|account|acct) ?(?:id|no|nr|num|number|key|identifier|ref|reference|code)\b/,
    'record number',
  ],
  [/\b(?:id|identifier|guid|uuid)\b/, 'record number', true],
  [/\b(?:e mail|email|mail)\b/, 'e-mail address'],
  [/\b(?:phone|telephone|tel|mobile|cell|cellphone|fax|contact)\b/, 'telephone number'],
  [/\b(?:ip|ip address|ipv4|ipv6)\b/, 'IP address'],
  [/\b(?:url|uri|website|web|link|homepage)\b/, 'web address'],
  [/\b(?:postcode|post code|postal code|zip|zip code|zipcode|plz)\b/, 'postcode'],
  [/\b(?:address|addr|street|town|city|suburb|county|house number|residence|domicile)\b/, 'postal address'],
  [
    /\b(?:surname|forename|firstname|lastname|fullname|middlename|given|maiden|nachname|vorname|nom|prenom|apellido|initials|next of kin|nok|alias)\b/,
    'name',
  ],
  [/\b(?:first|last|full|middle|family|patient|person|pt) name\b/, 'name'],
  [/\b(?:doctor|consultant|physician|clinician|nurse|gp|provider|staff|seen by|user)\b/, 'name'],
  [/\bnames?\b/, 'name', true],
  [
    /\b(?:notes?|comments?|complaints?|narrative|remarks?|free text|freetext|text|description|history|diagnos[ei]s|symptoms?|reason|presenting|summary|details?)\b/,
    'free text',
  ],
];

/** A header as words: camelCase split, signs turned to spaces, lower case. */
export function headerWords(header: string): string {
  return header
    .replace(/([\p{Ll}\d])(\p{Lu})/gu, '$1 $2')
    .replace(/(\p{Lu}+)(\p{Lu}\p{Ll})/gu, '$1 $2')
    .normalize('NFD')
    .replace(/\p{M}/gu, '')
    .replace(/[^\p{L}\d]+/gu, ' ')
    .trim()
    .toLowerCase();
}

/**
 * What a column's header says that it holds, if that could identify a patient.
 * A header may itself be a value (a file without a header row): then its value's kind is told.
 * @param now UTC seconds, see findIdentifier
 */
export function screenHeader(header: string, now: number): IdentifierKind | null {
  const words = headerWords(header);
  const placed = ofAPlace.test(words);
  for (const [rule, kind, unlessPlace] of rules) {
    if (rule.test(words) && !(unlessPlace && placed)) return kind;
  }
  const found = findIdentifier(header, now);
  return found?.certainty === 'sure' ? found.kind : null;
}
