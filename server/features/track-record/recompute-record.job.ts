import { setTimeout as pause } from 'node:timers/promises';
import { z } from 'zod';
import { id, instant } from '../../../shared/api/common.ts';
import type { Dependencies } from '../../dependencies.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import type { JobKind } from '../../jobs/queue.ts';
import { openPastWeeks, type GatherWeekInput } from './past-weeks.ts';
import { mondayAfter } from './recompute-times.ts';
import { scoreOutlooks } from './score-outlooks.job.ts';

export const recomputeJobKind = 'track-record.recompute';
export const recomputePayload = z.object({ siteId: id, from: instant, to: instant });

/** The week ahead is recomputed for the newest weeks alone: each takes a quarter of a megabyte. */
const weeksOfWeekAhead = 13;
const weeksPerFit = 13;
const weeksPerScore = 4;

/**
 * Recomputes the record of past weeks: before every quarter the model is fitted anew, every Monday its level is moved on, an hour
 * before each shift an outlook is issued, and in the newest 13 weeks the week ahead each day at 05:00; all by the product's own
 * code from the visits of before, the counts that the log shows at that moment, and today's plan, areas and limits. Each outlook
 * is stored with its inputs like any other. It stands back behind everything else, goes on after a restart where it was, and is
 * scored as it goes.
 * @param isBusy true while somebody's outlook is being computed
 * @param weekInput gathers what a week outlook is computed from
 */
export function makeRecomputeKind(deps: Dependencies, isBusy: () => boolean, weekInput: GatherWeekInput): JobKind {
  return {
    oneAtATime: true,
    async run({ job, payload, signal, progress }) {
      const { siteId, from, to } = recomputePayload.parse(payload);
      const record = await openPastWeeks(deps, siteId, job.id, weekInput);
      const { zone } = record;
      const mondays: number[] = [];
      for (let at = mondayAfter(zone, from); at < to; at = mondayAfter(zone, at)) mondays.push(at);
      let scoredTo = mondays.at(0) ?? to;
      for (const [index, monday] of mondays.entries()) {
        const until = Math.min(mondays.at(index + 1) ?? to, to);
        if (!(await record.isDone(monday, until))) {
          await standBack(isBusy, signal);
          const said = `Week ${String(index + 1)} of ${String(mondays.length)}`;
          progress(index / mondays.length, said);
          const modelId = await record.modelFor(monday, index % weeksPerFit === 0, signal);
          await standBack(isBusy, signal);
          await record.issueWeek(modelId, monday, until, index >= mondays.length - weeksOfWeekAhead, signal);
        }
        if ((index + 1) % weeksPerScore === 0 || index === mondays.length - 1) {
          await scoreOutlooks(deps, siteId, scoredTo, until, signal, () => undefined);
          scoredTo = until;
        }
      }
      await deps.database.write((manager) =>
        recordOwnAudit(manager, {
          at: deps.clock(),
          actor: job.createdBy,
          siteId,
          event: 'track-record.recomputed',
          subject: job.id,
          detail: { from, to, weeks: mondays.length },
        }),
      );
    },
  };
}

/** Waits while somebody's outlook is computed: background work must not make a nurse wait. */
async function standBack(isBusy: () => boolean, signal: AbortSignal): Promise<void> {
  do await pause(50, undefined, { signal });
  while (isBusy());
}
