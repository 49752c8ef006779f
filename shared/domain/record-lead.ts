/** What the record holds scores of. */
export type RecordMeasure = 'need' | 'peak' | 'arrivals' | 'shift arrivals';

/** Hours ahead at which a week outlook's needs and shifts are gathered: a group holds what lies up to so far ahead, past the one before. */
export const weekLeadGroups = [24, 48, 72] as const;

/** The group of something `seconds` after a week outlook was issued; null past the last. */
export function weekLeadGroup(seconds: number): number | null {
  return weekLeadGroups.find((hours) => seconds <= hours * 3600) ?? null;
}

/** A lead of the record in words: "4 h ahead", "49 to 72 h ahead", "3 days ahead". */
export function leadInWords(measure: RecordMeasure, leadHours: number): string {
  if (leadHours === 0) return 'Last outlook before it';
  if (measure === 'arrivals') return leadHours === 24 ? '1 day ahead' : `${String(leadHours / 24)} days ahead`;
  if (measure === 'need' && leadHours <= 24) return `${String(leadHours)} h ahead`;
  return leadHours <= 24 ? 'Up to 24 h ahead' : `${String(leadHours - 23)} to ${String(leadHours)} h ahead`;
}
