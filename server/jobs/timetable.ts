import { LessThanOrEqual } from 'typeorm';
import type { Dependencies } from '../dependencies.ts';
import { OutlookRow } from '../entities/OutlookRow.ts';
import { Site } from '../entities/Site.ts';
import { askForDueBriefs } from '../features/briefs/compose-brief.job.ts';
import type { OutlookIssuer } from '../features/outlook/issuer.ts';
import { askForBackup } from '../features/server-status/make-backup.job.ts';
import { askForPurge } from '../features/visit-logs/purge-visits.job.ts';
import { askForWeekOutlook } from '../features/week-ahead/issue-week-outlook.job.ts';
import type { SessionStore } from '../http/session-store.ts';

const lookEverySeconds = 20;

/**
 * Work by the clock: an outlook for every site once in each hour, so that Tonight stays current and the
 * record has no selection; a week outlook each day and whenever what it stands on changed; ended sessions are swept. After downtime each is caught up once.
 */
export function startTimetable(
  deps: Dependencies,
  issuer: OutlookIssuer,
  sessions: SessionStore,
): { stop(): Promise<void> } {
  let stopped = false;
  let sweptAt = 0;
  let looking: Promise<void> = Promise.resolve();

  async function look(): Promise<void> {
    const now = deps.clock();
    const hourStart = now - (now % 3600);
    await askForBackup(deps);
    for (const site of await deps.database.read.find(Site)) {
      if (stopped) return;
      const newest = await deps.database.read.findOne(OutlookRow, {
        // One on saving does not take its place: the record would then hold only the hours in which somebody saved.
        // Nor does one from before the clock was set back.
        where: { siteId: site.id, trigger: 'timetable', issuedAt: LessThanOrEqual(now) },
        order: { issuedAt: 'DESC' },
        select: { id: true, issuedAt: true },
      });
      if (!newest || newest.issuedAt < hourStart) await issuer.issueOrReport(site.id, 'timetable');
      await askForWeekOutlook(deps, site);
      await askForPurge(deps, site);
    }
    await askForDueBriefs(deps);
    if (now - sweptAt > 3600) {
      sweptAt = now;
      await sessions.sweep();
    }
  }

  const timer = setInterval(() => {
    looking = looking
      .then(() => (stopped ? undefined : look()))
      .catch((error: unknown) => {
        deps.logger.error({ err: error }, 'the timetable failed');
      });
  }, lookEverySeconds * 1000);
  return {
    async stop() {
      stopped = true;
      clearInterval(timer);
      await looking;
    },
  };
}
