import type { EntityManager } from 'typeorm';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { settingSectionNames, type SettingSection } from '../../../shared/domain/site-settings.ts';
import { readRevisions, recordSettingChanges, type SettingDifference } from '../../database/record-setting-changes.ts';
import type { Dependencies } from '../../dependencies.ts';
import { conflict, type Fault } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import type { SiteContext } from '../../http/route.ts';

export type SettingsContext = Pick<SiteContext<unknown>, 'site' | 'caller' | 'now' | 'requestId' | 'address'>;

/** Texts that people write are told of in the audit trail by name only; the history holds them, screened. */
const keptOutOfAudit = new Set(['Escalation text']);

/**
 * Saves one section of a site's settings in one transaction: refuses what was read before somebody else's change, writes
 * through `work`, and records what differs in the history and the audit trail.
 * @param revision of the section as the person saw it; null where the change does not overwrite anything
 * @param work writes, and tells what differs from before
 */
export async function changeSettings(
  deps: Dependencies,
  context: SettingsContext,
  section: SettingSection,
  revision: number | null,
  work: (manager: EntityManager) => Promise<SettingDifference[]>,
): Promise<{ changed: SettingDifference[]; revision: number }> {
  const { site, caller, now } = context;
  return deps.database.write(async (manager) => {
    const before = (await readRevisions(manager, site.id))[section];
    if (revision !== null && revision !== before) {
      throw conflict(
        `Somebody else changed “${settingSectionNames[section]}” meanwhile.`,
        'Reload the page to see what stands now, then make your change again.',
      );
    }
    const who = { siteId: site.id, at: now, madeBy: caller.person.name };
    const changed = await recordSettingChanges(manager, who, section, await work(manager));
    if (changed.length > 0) {
      await recordAudit(manager, context, 'site-settings.changed', site.id, {
        section,
        changes: changed.map((one) =>
          keptOutOfAudit.has(one.setting) ? { subject: one.subject, setting: one.setting } : one,
        ),
      });
    }
    return { changed, revision: before + changed.length };
  });
}

/** The fault of a text that seems to identify a person; none if it does not. */
export function textFaults(at: string, text: string): Fault[] {
  const kind = screenNote(text);
  if (kind === null) return [];
  return [{ at, message: `It seems to hold ${withArticle(kind)}. Say it without anything that identifies a person.` }];
}

/** A share as the history says it. */
export function percent(share: number): string {
  return `${String(Math.round(share * 1000) / 10)} %`;
}
