import { givenNames } from './given-names.ts';
import type { IdentifierKind } from './identifier-kind.ts';
import { isNationalNumber } from './national-number.ts';

const email = /[^\s@<>"']+\s?@\s?[^\s@<>"']+\.[a-z]{2,}/i;
const webAddress =
  /\b(?:https?|ftp):\/\/\S|\bwww\.\S|\b[a-z0-9-]+\.(?:com|org|net|edu|gov|info|health|nhs\.uk|co\.uk|de|fr|nl|au|ca|io)\b(?!\.?\d)/i;
const ipv4 = /(?<![\d.])(?:25[0-5]|2[0-4]\d|1?\d?\d)(?:\.(?:25[0-5]|2[0-4]\d|1?\d?\d)){3}(?![\d.])/;
const ipv6 =
  /(?<![\w:])(?:[0-9a-f]{1,4}:){7}[0-9a-f]{1,4}(?![\w:])|(?<![\w:])(?:[0-9a-f]{1,4}:){1,6}:(?:[0-9a-f]{1,4}(?::[0-9a-f]{1,4}){0,5})?(?![\w:])/i;
const titleBeforeName = /\b(?:Mr|Mrs|Ms|Miss|Mx|Dr|Prof|Herr|Frau|Mme|Señora?)\b\.?\s+\p{Lu}/u;
/** Written as addresses are, so that "2 patients on the way" is none. */
const address =
  /\b\d{1,5}[a-zA-Z]?,?\s+(?:\p{Lu}[\p{L}'.-]*\s+){1,3}(?:Street|St|Road|Rd|Avenue|Ave|Lane|Ln|Drive|Dr|Close|Crescent|Court|Ct|Way|Place|Pl|Terrace|Gardens|Boulevard|Blvd|Highway|Square|Sq|Row|Hill|Mews)\b|\b\p{L}{3,}(?:straße|strasse|gasse|allee|platz|straat|gatan|vägen|veien)\s+\d|\b(?:Rue|rue|Calle|Via|Piazza|Rua)\s+(?:\p{L}+\s+){1,4}\d|\b\d{1,4},?\s+(?:rue|boulevard|avenue)\s+\p{L}|\b[Pp]\.?\s?[Oo]\.? [Bb]ox\s*\d/u;
/** A whole value that is an address however it is written. */
const wholeAddress =
  /^(?:flat|unit|apt\.?)?\s*\d{1,5}[a-z]?,?\s+(?:\p{L}[\p{L}'.-]*\s+){1,4}(?:street|st|road|rd|avenue|ave|lane|ln|drive|dr|close|crescent|court|ct|way|place|pl|terrace|gardens|boulevard|blvd|highway|square|sq|row|hill|mews)\b/iu;
const ukPostcode = /(?<![A-Z0-9])(?:[A-Z]{1,2}\d[A-Z\d]?\s?\d[ABD-HJLNP-UW-Z]{2}|GIR ?0AA)(?![A-Z0-9])/i;
const otherPostcode = /(?<![\w-])(?:\d{5}-\d{4}|[ABCEGHJ-NPRSTVXY]\d[A-Z][ -]?\d[A-Z]\d)(?![\w-])/;
const dutchPostcode = /^[1-9]\d{3}\s?[A-Z]{2}$/;
/** UK National Insurance number (HMRC manual NIM39110), US social security number (20 CFR 422), US Medicare beneficiary identifier (CMS, "Understanding the MBI format"). */
const insurance =
  /(?<![A-Z0-9])(?:[A-CEGHJ-PR-TW-Z][A-CEGHJ-NPR-TW-Z] ?\d{2} ?\d{2} ?\d{2} ?[A-D]|(?!000|666|9)\d{3}-(?!00)\d{2}-(?!0000)\d{4}|[1-9][AC-HJKMNP-RT-Y][AC-HJKMNP-RT-Y0-9]\d-?[AC-HJKMNP-RT-Y][AC-HJKMNP-RT-Y0-9]\d-?[AC-HJKMNP-RT-Y]{2}\d{2})(?![A-Z0-9])/i;
const recordWord =
  /\b(?:mrn|urn|pid|nhs|chi|nhi|hospital (?:no|number)|patient (?:id|no|number)|record (?:no|number)|case (?:no|number)|chart|encounter|visit (?:id|no|number)|hosp(?:ital)? ?#)\s*[.:#-]?\s*[A-Z]{0,4}-?\d{3,}/i;
const insuranceWord =
  /\b(?:insurance|policy|member|medicare|medicaid|ssn|ni(?:no)?|social security)\s*(?:no|number|id)?\s*[.:#]?\s*[A-Z]{0,3}\d{4,}/i;
const telephoneWord =
  /\b(?:tel|phone|telephone|mobile|mob|cell|fax|call(?:ed)?(?: back)?(?: on)?)\b\s*[.:]?\s*\+?[\d(][\d\s().-]{5,}/i;
const birthWord = /\b(?:d\.?o\.?b\.?|born|birth(?:day|date)?|geb)\b/i;
const telephone =
  /^(?:\+|00)\d[\d\s().-]{6,18}$|^\(?0\d{1,5}\)?[\s.-]\d{2,4}[\s.-]?\d{3,6}(?:[\s.-]?\d{2,4})?$|^0\d{9,10}$|^(?:1[\s.-])?\(?\d{3}\)?[\s.-]\d{3}[\s.-]\d{4}$/;
const dateOnly =
  /^(?:(\d{4})[-/.](\d{1,2})[-/.](\d{1,2})|(\d{1,2})[-/. ](?:\d{1,2}|\p{L}{3,9})[-/. ](\d{4}|\d{2}))(?:[T ]00:00(?::00(?:\.0+)?)?(?:Z|[+-]00:?00)?)?$/u;
const dateAndTime = /^\d{1,4}[-/.]\d{1,2}[-/.]\d{1,4}[T ]\d{1,2}[:.]\d{2}/;
const compactTime = /^(?:19|20)\d{2}(?:0[1-9]|1[0-2])(?:0[1-9]|[12]\d|3[01])(?:[T ]?\d{4}(?:\d{2})?)?$/;
const bareNumber = /^[A-Z]{0,4}[ -]?\d{6,14}(?:[/-]\d{1,2})?$/i;

/** Words of places in a hospital; a short text that holds one is no person's name. */
const placeWord =
  /\b(?:area|bay|bays|bed|beds|zone|room|rooms|ward|unit|suite|hall|pod|wing|floor|level|team|side|main|fast|track|rapid|minor|minors|major|majors|resus\w*|acute|ambulatory|child\w*|paed\w*|ped\w*|adult\w*|observation|obs|assessment|triage|trauma|emergency|care|clinic|centre|center|department|dept|stream|waiting|chairs?|cubicle|corridor|hospital|site|medical|medicine|surgical|surgery|mental|health|frailty|older|people|urgent|critical|intensive|high|low|dependency|short|stay|day|night|north|south|east|west|upper|lower|front|back|left|right|red|green|blue|yellow|amber|orange|purple|white|black|pink|grey|gray|one|two|three|four|five|six|home|admitted|discharged?|transferred|transfer|before|treatment|unknown|other|none|not|known|walk|in|ambulance|yes|no|true|false|saint|st)\b/i;

/** How sure a finding is: `by rarity` means that only a value that hardly ever occurs counts. */
export interface Finding {
  kind: IdentifierKind;
  certainty: 'sure' | 'by rarity';
}

const sure = (kind: IdentifierKind): Finding => ({ kind, certainty: 'sure' });
const byRarity = (kind: IdentifierKind): Finding => ({ kind, certainty: 'by rarity' });

/** Signs that identify wherever they stand in a text, notes included. */
export function findInText(text: string): Finding | null {
  if (email.test(text)) return sure('e-mail address');
  if (!/^\d{1,2}\.\d{1,2}\.\d{2,4}\b/.test(text) && webAddress.test(text)) return sure('web address');
  if (ipv4.test(text) || (text.includes('::') ? ipv6.test(text) : /(?:[0-9a-f]{1,4}:){7}/i.test(text)))
    return sure('IP address');
  if (birthWord.test(text) && /\d/.test(text)) return sure('date of birth');
  if (recordWord.test(text)) return sure('record number');
  if (insuranceWord.test(text) || insurance.test(text)) return sure('insurance number');
  for (const run of text.match(/\b[A-Z]{0,3}\d[\d .-]{5,20}\d[A-Z]?\b|\b[A-Z]{1,6}\d[A-Z0-9]{6,12}/gi) ?? []) {
    if (!dateOnly.test(run.trim()) && !compactTime.test(run.trim()) && isNationalNumber(run))
      return sure('national patient number');
  }
  if (telephoneWord.test(text)) return sure('telephone number');
  if (address.test(text)) return sure('postal address');
  if (ukPostcode.test(text) || otherPostcode.test(text)) return sure('postcode');
  return null;
}

/** True when two words stand beside each other of which one is a common given name and both are written as names. */
export function holdsFullName(text: string): boolean {
  const words = text.match(/\p{L}[\p{L}'’-]+/gu) ?? [];
  return words.some((word, index) => {
    const next = words[index + 1] as string | undefined;
    if (next === undefined || !/^\p{Lu}/u.test(word) || !/^\p{Lu}/u.test(next)) return false;
    return (
      (givenNames.has(word.toLowerCase()) && !placeWord.test(next)) ||
      (givenNames.has(next.toLowerCase()) && text.includes(','))
    );
  });
}

/** True when a title stands before a capitalised word. */
export function holdsTitledName(text: string): boolean {
  return titleBeforeName.test(text);
}

/**
 * What a value that should have been a time, an area, a disposition or yes/no looks like instead.
 * Values that are what they should be are never asked about.
 * @param now UTC seconds; a date without a time more than five years older is taken for a date of birth
 * @returns null if nothing about it could identify a patient
 */
export function findIdentifier(value: string, now: number): Finding | null {
  const text = value.trim();
  if (text.length < 2) return null;
  if (dateAndTime.test(text) && !dateOnly.test(text) && text.length < 40) return null;
  const date = dateOnly.exec(text);
  if (date) {
    const year = Number(date[1] ?? date[5]);
    const old = year < 100 ? false : year < new Date(now * 1000).getUTCFullYear() - 5;
    return old ? sure('date of birth') : null;
  }
  if (compactTime.test(text)) {
    const old = text.length === 8 && Number(text.slice(0, 4)) < new Date(now * 1000).getUTCFullYear() - 5;
    return old ? sure('date of birth') : null;
  }
  if (isNationalNumber(text)) return sure('national patient number');
  const found = findInText(text);
  if (found) return found;
  if (telephone.test(text)) return sure('telephone number');
  if (bareNumber.test(text)) return byRarity('record number');
  if (/^\d{5}$/.test(text)) return byRarity('postcode');
  if (wholeAddress.test(text)) return sure('postal address');
  if (dutchPostcode.test(text)) return sure('postcode');
  if (holdsTitledName(text) || holdsFullName(text)) return sure('name');
  const words = text.split(/\s+/);
  if (text.length > 60 || words.length > 6 || /[.!?;]\s+\S|[\r\n]/.test(text)) return sure('free text');
  if (givenNames.has(text.toLowerCase())) return byRarity('name');
  const nameShaped = /^\p{Lu}[\p{L}'’-]+(?:,)?(?:\s+\p{Lu}\.?){0,2}\s+\p{Lu}[\p{L}'’-]+$/u.test(text);
  if (nameShaped && !placeWord.test(text)) return byRarity('name');
  return null;
}
