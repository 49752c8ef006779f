import { z } from 'zod';
import { id, instant } from '../../../shared/api/common.ts';
import { readShifts } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import { ExposureGapRow } from '../../entities/ExposureGapRow.ts';
import { OutlookLawsRow } from '../../entities/OutlookLawsRow.ts';
import { WeekOutlookLawsRow } from '../../entities/WeekOutlookLawsRow.ts';
import { Site } from '../../entities/Site.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import type { JobKind, JobSpec } from '../../jobs/queue.ts';
import { workerUrl } from '../../simulation/pool.ts';
import { readApprovedAs } from '../../database/read-approved-as.ts';
import { scoreColumns, sumColumns, type ScoredOutlook, type ScoreTask, type ScoreValues } from './score-request.ts';
import { watchModelInUse } from './watch-model.ts';

export const scoreJobKind = 'track-record.score';
const payloadSchema = z.object({ siteId: id, from: instant, to: instant });
const worker = workerUrl(import.meta.url, 'score.worker');

const day = 86_400;
/** Issued outlooks scored by one task of a thread, and stored in one write. */
const chunkSeconds = 28 * day;
const outlooksPerWrite = 8;
/** An outlook of tonight speaks of up to this long after it was issued, one of the week ahead of so much longer. */
const reachSeconds = 4 * day;
const weekReachSeconds = 5 * day;
/** One of the week ahead holds some hundred scores. */
const weekOutlooksPerWrite = 2;

/**
 * The job that scores what was said about the time of a log: when it lands, or is withdrawn (then what it told is un-scored).
 * @param from the log's period, UTC seconds
 */
export function scoreJob(siteId: string, from: number, to: number): JobSpec {
  return {
    kind: scoreJobKind,
    title: 'Score earlier forecasts',
    siteId,
    payload: { siteId, from: Math.max(0, from - reachSeconds), to },
    createdBy: 'the job queue',
  };
}

/** Scores run one after another for a site: the sums of a week are made from all of its scores. */
const lastOfSite = new Map<string, Promise<void>>();

/** Scores outlooks in the background: computing on a thread of the shared pool, writing in short batches. It may run again at any time. */
export function makeScoreKind(deps: Dependencies): JobKind {
  return {
    async run({ payload, signal, progress }) {
      const { siteId, from, to } = payloadSchema.parse(payload);
      const before = lastOfSite.get(siteId) ?? Promise.resolve();
      const own = before
        .catch(() => undefined)
        .then(() =>
          scoreOutlooks(deps, siteId, from, to, signal, (share) => {
            progress(share, 'Scoring earlier forecasts');
          }),
        );
      lastOfSite.set(siteId, own);
      try {
        await own;
      } finally {
        if (lastOfSite.get(siteId) === own) lastOfSite.delete(siteId);
      }
    },
  };
}

/** Scores the outlooks of a site that were issued in [from, to), and looks at the model in use afterwards. */
export async function scoreOutlooks(
  deps: Dependencies,
  siteId: string,
  from: number,
  to: number,
  signal: AbortSignal,
  onProgress: (share: number) => void,
): Promise<void> {
  const { database, clock, pool } = deps;
  const { read } = database;
  const site = await read.findOneByOrFail(Site, { id: siteId });
  const gaps = await read.findBy(ExposureGapRow, { siteId });
  const shifts = await readShifts(read, siteId);
  const approvedAs = await readApprovedAs(read, siteId);
  const weeks = new Set<number>();
  let unscored = 0;
  const first = Math.max(0, from - weekReachSeconds);
  const chunks = (['tonight', 'week'] as const).flatMap((of) => {
    const start = of === 'week' ? first : from;
    const count = Math.max(0, Math.ceil((to - start) / chunkSeconds));
    return Array.from({ length: count }, (_, i) => ({ of, at: start + i * chunkSeconds }));
  });
  for (const [index, { of, at }] of chunks.entries()) {
    signal.throwIfAborted();
    const task: ScoreTask = {
      kind: 'score',
      of,
      databaseFile: database.file,
      siteId,
      timeZone: site.timeZone,
      stayCapHours: site.stayCapHours,
      shifts: shifts.map(({ name, startMinute, endMinute }) => ({ name, startMinute, endMinute })),
      gaps: gaps.map((gap) => ({ from: gap.fromAt, to: gap.untilAt })),
      approvedAs,
      issuedFrom: at,
      issuedTo: Math.min(to, at + chunkSeconds),
      now: clock(),
    };
    const scored = await pool.run<ScoredOutlook[]>(worker, task, { signal });
    const perWrite = of === 'week' ? weekOutlooksPerWrite : outlooksPerWrite;
    for (let i = 0; i < scored.length; i += perWrite) {
      const stored = await storeScores(deps, of, scored.slice(i, i + perWrite));
      stored.weeks.forEach((week) => weeks.add(week));
      unscored += stored.unscored;
    }
    onProgress((0.95 * (index + 1)) / chunks.length);
  }
  await storeSums(deps, siteId, [...weeks], signal);
  if (unscored > 0) {
    await database.write((manager) =>
      recordOwnAudit(manager, {
        at: clock(),
        actor: 'the job queue',
        siteId,
        event: 'track-record.unscored',
        subject: siteId,
        detail: { outlooks: unscored },
      }),
    );
  }
  await watchModelInUse(deps, siteId);
}

/** Puts the scores of some outlooks in place of those they had. @returns the weeks concerned, and how many lost scores to a withdrawal. */
async function storeScores(
  deps: Dependencies,
  of: 'tonight' | 'week',
  outlooks: readonly ScoredOutlook[],
): Promise<{ weeks: number[]; unscored: number }> {
  const ids = JSON.stringify(outlooks.map(({ outlookId }) => outlookId));
  const rows = outlooks.flatMap(({ scores }) => scores);
  const key = of === 'week' ? 'weekOutlookId' : 'outlookId';
  return deps.database.write(async (manager) => {
    const before = await manager.query<{ week: number; outlookId: string }[]>(
      `SELECT DISTINCT week, ${key} AS outlookId FROM forecast_score WHERE ${key} IN (SELECT value FROM json_each(?))`,
      [ids],
    );
    await manager.query(`DELETE FROM forecast_score WHERE ${key} IN (SELECT value FROM json_each(?))`, [ids]);
    if (rows.length > 0) await manager.query(insertFrom('forecast_score', scoreColumns), [JSON.stringify(rows)]);
    for (const state of new Set(outlooks.map((outlook) => outlook.state))) {
      const own = outlooks.filter((outlook) => outlook.state === state).map(({ outlookId }) => outlookId);
      await manager
        .createQueryBuilder()
        .update<OutlookLawsRow | WeekOutlookLawsRow>(of === 'week' ? WeekOutlookLawsRow : OutlookLawsRow)
        .set({ state })
        .where(`${key} IN (:...own) AND state <> :state`, { own, state })
        .execute();
    }
    const had = new Set(before.map(({ outlookId }) => outlookId));
    const lost = outlooks.filter(({ outlookId, state }) => state === 'withdrawn' && had.has(outlookId));
    const week = scoreColumns.indexOf('week');
    return {
      weeks: [...before.map((row) => row.week), ...rows.map((row) => Number(row[week]))],
      unscored: lost.length,
    };
  });
}

const weeksPerSum = 4;

async function storeSums(deps: Dependencies, siteId: string, weeks: number[], signal: AbortSignal): Promise<void> {
  for (let i = 0; i < weeks.length; i += weeksPerSum) {
    const some = weeks.slice(i, i + weeksPerSum);
    const task: ScoreTask = { kind: 'sum', databaseFile: deps.database.file, siteId, weeks: some };
    const rows = await deps.pool.run<ScoreValues[]>(worker, task, { signal });
    await deps.database.write(async (manager) => {
      await manager.query(`DELETE FROM score_week WHERE siteId = ? AND week IN (SELECT value FROM json_each(?))`, [
        siteId,
        JSON.stringify(some),
      ]);
      if (rows.length > 0) await manager.query(insertFrom('score_week', sumColumns), [JSON.stringify(rows)]);
    });
  }
}

function insertFrom(table: string, columns: readonly string[]): string {
  const names = columns.map((column) => `"${column}"`).join(', ');
  const values = columns.map((_, i) => `value ->> ${String(i)}`).join(', ');
  return `INSERT INTO ${table} (${names}) SELECT ${values} FROM json_each(?)`;
}
