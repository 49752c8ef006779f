import { z } from 'zod';
import type { Dependencies } from '../../dependencies.ts';
import { lastDue } from '../../../shared/domain/brief-schedule.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { readModelInUse } from '../../database/read-model.ts';
import { WeekOutlookRow } from '../../entities/WeekOutlookRow.ts';
import { Brief } from '../../entities/Brief.ts';
import { BriefSettings } from '../../entities/BriefSettings.ts';
import { Site } from '../../entities/Site.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import { PermanentJobError, RetryJobError, type JobKind } from '../../jobs/queue.ts';
import { BriefRefused, composeBrief } from './compose-brief.ts';
import { putOnItsWay } from './put-on-its-way.ts';

export const composeJobKind = 'brief.compose';

const composer = 'the timetable';
/** A brief waits this often for a week outlook that is being computed, then goes without. */
const waits = 8;
const waitSeconds = 20;

const payloadSchema = z.object({ siteId: z.string(), scheduledFor: z.int() });

/**
 * Queues the brief of every site whose time has come. What is due is marked as answered in the same transaction; after a
 * downtime of weeks only the last due time is answered.
 */
export async function askForDueBriefs(deps: Dependencies): Promise<void> {
  const { database, jobs, clock } = deps;
  const due = (settings: BriefSettings, { timeZone }: Site) => lastDue(makeZone(timeZone), settings, clock());
  for (const settings of await database.read.findBy(BriefSettings, { scheduled: true })) {
    const site = await database.read.findOneByOrFail(Site, { id: settings.siteId });
    if (due(settings, site) <= settings.lastDueAt) continue;
    await database.write(async (manager) => {
      const current = await manager.findOneBy(BriefSettings, { siteId: site.id, scheduled: true });
      if (!current) return;
      const scheduledFor = due(current, site);
      if (scheduledFor <= current.lastDueAt) return;
      await manager.update(BriefSettings, { siteId: site.id }, { lastDueAt: scheduledFor });
      await jobs.enqueue(manager, {
        kind: composeJobKind,
        title: 'Compose the weekly brief',
        siteId: site.id,
        payload: { siteId: site.id, scheduledFor },
        createdBy: composer,
        maxAttempts: waits + 4,
      });
    });
  }
}

/** Composes a brief that is due; then it waits for approval, or is put on its way at once. */
export function makeComposeKind(deps: Dependencies): JobKind {
  return {
    async run({ job, payload, signal, progress }) {
      const { siteId, scheduledFor } = payloadSchema.parse(payload);
      const { read, write } = deps.database;
      // Run again after a crash: the brief and its sending were stored together, or not at all.
      if (await read.existsBy(Brief, { siteId, scheduledFor })) return;
      const site = await read.findOneByOrFail(Site, { id: siteId });
      const settings = await read.findOneByOrFail(BriefSettings, { siteId });
      if (job.attempts < waits && (await lacksOutlook(deps, siteId))) {
        throw new RetryJobError('The week ahead has not been computed yet.', waitSeconds);
      }
      progress(0.1, 'Looking back and ahead');
      let composed;
      try {
        composed = await composeBrief(deps, site, settings.covers, composer, signal);
      } catch (error) {
        throw error instanceof BriefRefused ? new PermanentJobError(error.message) : error;
      }
      const { approveFirst } = settings;
      await write(async (manager) => {
        const state = approveFirst ? 'awaiting approval' : 'draft';
        const nobody = { approvedBy: null, approvedAt: null, sentAt: null };
        await manager.insert(Brief, { ...composed, ...nobody, state, scheduledFor });
        const recipients = approveFirst ? 0 : await putOnItsWay(deps, manager, composed, composer);
        await recordOwnAudit(manager, {
          at: deps.clock(),
          actor: composer,
          siteId,
          event: 'brief.composed',
          subject: composed.id,
          detail: { scheduledFor, approveFirst, recipients },
        });
      });
    },
    async settle(manager, job, error) {
      const { siteId, scheduledFor } = payloadSchema.parse(JSON.parse(job.payload));
      await recordOwnAudit(manager, {
        at: deps.clock(),
        actor: composer,
        siteId,
        event: 'brief.not-composed',
        subject: job.id,
        detail: { scheduledFor, error },
      });
    },
  };
}

/** True while a site with a model has no week outlook of today or yesterday. */
async function lacksOutlook({ database, clock }: Dependencies, siteId: string): Promise<boolean> {
  if (!(await readModelInUse(database.read, siteId))) return false;
  const newest = await database.read.maximum(WeekOutlookRow, 'issuedAt', { siteId });
  return newest === null || newest < clock() - 36 * 3600;
}
