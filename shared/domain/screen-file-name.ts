import { findIdentifier } from './find-identifier.ts';

/** What a file is called here when its own name cannot be kept. */
export const neutralFileName = 'visit-log.csv';

/**
 * A file's name as it may be kept: its last part, short, without control signs; the neutral name if
 * anything in it could identify a patient.
 * @param now UTC seconds, see findIdentifier
 */
export function screenFileName(name: string, now: number): string {
  const base = (name.split(/[\\/]/).at(-1) ?? '').replace(/\p{C}/gu, '').trim().slice(0, 120);
  const stem = base.replace(/(?:\.(?:csv|tsv|txt|xlsx|ndjson|jsonl|gz))+$/i, '');
  if (stem === '') return neutralFileName;
  const parts = [stem, stem.replace(/[_+]+/g, ' '), ...stem.split(/[_\s]+/), ...stem.split(/[-_\s]+/)];
  return parts.some((part) => findIdentifier(part, now)?.certainty === 'sure') ? neutralFileName : base;
}
