import { dispositionCode, type Disposition } from './disposition.ts';
import { notRecorded } from './visit-row.ts';

const plain = (text: string) =>
  text
    .normalize('NFD')
    .replace(/\p{M}/gu, '')
    .toLowerCase()
    .replace(/[^\p{L}\d]+/gu, ' ')
    .trim();

/** The area that a text names: the same letters and figures in any case; null if none. */
export function guessArea(text: string, areas: readonly { id: string; name: string }[]): string | null {
  const wanted = plain(text);
  return areas.find((area) => area.id === text || plain(area.name) === wanted)?.id ?? null;
}

const words: readonly [RegExp, Disposition][] = [
  [
    /\b(?:lwbs|lwbt|dnw|dna|ama|left|walked out|absconded|did not wait|self discharge\w*|eloped)\b/,
    'left before treatment',
  ],
  [
    /\b(?:transfer\w*|other (?:hospital|facility|site|healthcare facility)|another hospital|psychiatric hospital|rehabilitation|skilled nursing|hospice|long term care)\b/,
    'transferred',
  ],
  [/\b(?:admi\w*|inpatient|ward|icu|itu|theatre)\b/, 'admitted'],
  [/\b(?:home|discharge\w*|usual residence|routine)\b/, 'home'],
];

/** The code of the disposition that a text seems to mean; null if it is not clear. */
export function guessDisposition(text: string): number | null {
  const wanted = plain(text);
  if (/^(?:unknown|not known|not recorded|none|n a|null|)$/.test(wanted)) return notRecorded;
  // A death ends the stay, and is none of the four.
  if (/\b(?:died|death|dead|deceased|expired)\b/.test(wanted)) return notRecorded;
  const found = words.find(([rule]) => rule.test(wanted));
  return found ? dispositionCode[found[1]] : null;
}

/** 1 or 0 for what seems to mean arrival by ambulance or not, 255 for not recorded; null if it is not clear. */
export function guessAmbulance(text: string): number | null {
  const wanted = plain(text);
  if (/^(?:unknown|not known|not recorded|n a|null|)$/.test(wanted)) return notRecorded;
  if (/^(?:y|yes|true|1|t|j|ja|oui|si)$/.test(wanted) || /\b(?:ambulance|amb|ems|helicopter|air)\b/.test(wanted))
    return 1;
  if (
    /^(?:n|no|false|0|f|nein|non)$/.test(wanted) ||
    /\b(?:walk\w*|foot|car|taxi|bus|self|private|police|other|public)\b/.test(wanted)
  )
    return 0;
  return null;
}
