import type { EntityManager } from 'typeorm';
import { settingSections, type SettingSection } from '../../shared/domain/site-settings.ts';
import { SettingChange } from '../entities/SettingChange.ts';
import { newId } from './new-id.ts';

/** One setting as it was and as it is, in the words of the history. */
export interface SettingDifference {
  /** The area, shift or calendar day; null: the site itself. */
  subject: string | null;
  setting: string;
  before: string | null;
  after: string | null;
}

/**
 * Adds what differs to the history, within the caller's transaction.
 * @returns the differences that were written; none where everything is as it was
 */
export async function recordSettingChanges(
  manager: EntityManager,
  who: { siteId: string; at: number; madeBy: string },
  section: SettingSection,
  differences: readonly SettingDifference[],
): Promise<SettingDifference[]> {
  const real = differences.filter(({ before, after }) => before !== after);
  for (const difference of real) await manager.insert(SettingChange, { id: newId(), ...who, section, ...difference });
  return real;
}

/** Changes made so far in each section: a form that was filled from an older count must not overwrite a newer one. */
export async function readRevisions(read: EntityManager, siteId: string): Promise<Record<SettingSection, number>> {
  const rows = await read.query<{ section: SettingSection; count: number }[]>(
    'SELECT section, COUNT(*) AS count FROM setting_change WHERE siteId = ? GROUP BY section',
    [siteId],
  );
  const counts = new Map(rows.map(({ section, count }) => [section, count]));
  const revisions = settingSections.map((section) => [section, counts.get(section) ?? 0] as const);
  return Object.fromEntries(revisions) as Record<SettingSection, number>;
}
