import SqliteDatabase from 'better-sqlite3';
import { addScore, emptySums, type KeptScore, type ScoreSums } from '../../../shared/forecasting/score-sums.ts';
import { makeOutlookScorer, type StoredOutlook } from './score-stored.ts';
import type { ScoredOutlook, ScoreTask, ScoreValues } from './score-request.ts';

/** Scores stored outlooks against the logs, or adds the scores of some weeks up, on a thread of its own. */
export default function work(task: ScoreTask): ScoredOutlook[] | ScoreValues[] {
  const db = new SqliteDatabase(task.databaseFile, { readonly: true, fileMustExist: true, timeout: 5000 });
  try {
    return task.kind === 'score' ? scoreOutlooks(db, task) : sumWeeks(db, task);
  } finally {
    db.close();
  }
}

const storedOf = {
  tonight: `SELECT l.outlookId AS id, l.issuedAt, l.laws, o.trigger, o.modelId, o.seed, o.input
    FROM outlook_laws l JOIN outlook o ON o.id = l.outlookId
    WHERE l.siteId = ? AND l.issuedAt >= ? AND l.issuedAt < ? ORDER BY l.issuedAt, o.rowid`,
  week: `SELECT l.weekOutlookId AS id, l.issuedAt, l.laws, o.trigger, o.modelId, o.seed, o.input
    FROM week_outlook_laws l JOIN week_outlook o ON o.id = l.weekOutlookId
    WHERE l.siteId = ? AND l.issuedAt >= ? AND l.issuedAt < ? ORDER BY l.issuedAt, o.rowid`,
};

function scoreOutlooks(db: SqliteDatabase.Database, task: ScoreTask & { kind: 'score' }): ScoredOutlook[] {
  const outlooks = db.prepare(storedOf[task.of]).all(task.siteId, task.issuedFrom, task.issuedTo) as StoredOutlook[];
  if (outlooks.length === 0) return [];
  const { after } = db
    .prepare('SELECT min(issuedAt) AS after FROM outlook_laws WHERE siteId = ? AND issuedAt >= ?')
    .get(task.siteId, task.issuedTo) as { after: number | null };
  const withdrawn = db
    .prepare(`SELECT periodFrom AS "from", periodTo AS "to" FROM visit_log WHERE siteId = ? AND status = 'withdrawn'`)
    .all(task.siteId) as { from: number; to: number }[];
  const acknowledged = db
    .prepare('SELECT areaId, hours FROM acknowledgement WHERE siteId = ? AND untilAt >= ?')
    .all(task.siteId, task.issuedFrom) as { areaId: string; hours: string }[];
  const score = makeOutlookScorer(task, withdrawn, acknowledged);
  return outlooks.map((outlook, i) => score(outlook, outlooks.at(i + 1)?.issuedAt ?? after));
}

type ScoreFields = Record<'measure' | 'areaId' | 'shift' | 'modelId', string> &
  Record<'week' | 'leadHours' | 'acknowledged' | 'observed', number> &
  Record<
    'logScore' | 'absoluteError' | 'naiveError' | 'pitLower' | 'pitUpper' | 'floorPinball' | 'floorError' | 'chance',
    number | null
  > & { short: number | null } & Record<'pinball' | 'intervals' | 'baselines', string | null>;

function sumWeeks(db: SqliteDatabase.Database, { siteId, weeks }: ScoreTask & { kind: 'sum' }): ScoreValues[] {
  const rows = db
    .prepare('SELECT * FROM forecast_score WHERE siteId = ? AND week IN (SELECT value FROM json_each(?))')
    .iterate(siteId, JSON.stringify(weeks)) as IterableIterator<ScoreFields>;
  const groups = new Map<string, { key: ScoreValues; sums: ScoreSums }>();
  for (const row of rows) {
    const key = [siteId, row.week, row.measure, row.leadHours, row.areaId, row.shift, row.modelId, row.acknowledged];
    const name = JSON.stringify(key);
    const group = groups.get(name) ?? { key, sums: emptySums() };
    groups.set(name, group);
    addScore(group.sums, {
      ...row,
      pinball: parse(row.pinball) as KeptScore['pinball'],
      intervals: parse(row.intervals) as KeptScore['intervals'],
      baselines: parse(row.baselines) as KeptScore['baselines'],
      short: row.short === null ? null : row.short === 1,
    });
  }
  return [...groups.values()].map(({ key, sums }) => [...key, JSON.stringify(sums)]);
}

function parse(text: string | null): unknown {
  return text === null ? null : JSON.parse(text);
}
