import type { Dependencies } from '../dependencies.ts';
import { OutlookRow } from '../entities/OutlookRow.ts';
import { Site } from '../entities/Site.ts';
import type { OutlookIssuer } from '../features/outlook/issuer.ts';
import type { SessionStore } from '../http/session-store.ts';

const lookEverySeconds = 20;

/**
 * Work by the clock: an outlook for every site once in each hour, so that Tonight stays current and the
 * record has no selection; ended sessions are swept. After downtime each is caught up once.
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
    for (const site of await deps.database.read.find(Site, { select: { id: true } })) {
      if (stopped) return;
      const newest = await deps.database.read.findOne(OutlookRow, {
        where: { siteId: site.id },
        order: { issuedAt: 'DESC' },
        select: { id: true, issuedAt: true },
      });
      if (!newest || newest.issuedAt < hourStart) await issuer.issueOrReport(site.id, 'timetable');
    }
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
