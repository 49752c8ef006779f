import type Database from 'better-sqlite3';
import type { BuiltSite } from './build-site.ts';
import { buildVisitCsv } from './build-visit-csv.ts';

/** Ids of rows that were answered as stored, by table. */
export type Answered = Record<
  'census' | 'bed_change' | 'health_group' | 'person' | 'visit_log' | 'arrival_model',
  string[]
>;

/** What is read of replies. */
export interface WorkReply {
  id?: string;
  censusId?: string;
  changeId?: string;
  checkId?: string;
  logId?: string;
  modelId?: string;
  person?: { id: string };
}

/**
 * What people do at one time, each piece once: a census, a change of staffed beds, a new group, an invitation (which is
 * mailed), a backup, an import of a log, a fit. What is answered as stored is noted.
 * @param request sends; answers null where the request was refused
 * @param now UTC seconds
 */
export function makeMixedWork(
  { site, areas }: BuiltSite,
  request: (path: string, body: object | string) => Promise<WorkReply | null>,
  now: () => number,
): { answered: Answered; works: (() => Promise<void>)[] } {
  const answered: Answered = {
    census: [],
    bed_change: [],
    health_group: [],
    person: [],
    visit_log: [],
    arrival_model: [],
  };
  const path = `/api/sites/${site.id}`;
  let n = 0;
  const note = (table: keyof Answered, id: string | undefined) => {
    if (id === undefined) throw new Error(`an answer names no row of ${table}`);
    answered[table].push(id);
  };
  const works = [
    async () => {
      const figures = areas.map(({ id }) => ({ areaId: id, present: n % 9, waiting: 0, boarding: 0 }));
      const made = await request(`${path}/censuses`, {
        ...{
          takenAt: now(),
          areas: figures,
          undecidedWaiting: null,
          ambulancesHolding: null,
          arrivalsSinceMidnight: null,
        },
      });
      if (made) note('census', made.censusId);
    },
    async () => {
      const body = { areaId: areas[0].id, beds: 10, blocked: 0, until: 'end of this shift', reason: 'Soak test' };
      const made = await request(`${path}/staffed-bed-changes`, body);
      if (made) note('bed_change', made.changeId);
    },
    async () => {
      const made = await request('/api/installation/groups', { name: `Group ${String((n += 1))} ${String(now())}` });
      if (made) note('health_group', made.id);
    },
    async () => {
      const email = `p${String((n += 1))}.${String(now())}@people.test`;
      const made = await request('/api/people', { email, name: 'Soak Person' });
      if (made) note('person', made.person?.id);
    },
    async () => {
      await request('/api/server-status/backups', {});
    },
    async () => {
      // Years back and with a length of its own, so that every file is another.
      const rows = 20_000 + (n += 1);
      const csv = buildVisitCsv({ from: now() - 700 * 86_400, rows, everySeconds: 600 });
      const check = await request(`${path}/visit-logs/checks?fileName=soak.csv`, csv);
      if (!check) return;
      const facts = { selectedBy: 'arrived', takenAt: now(), missingDeparture: 'still present' };
      const made = await request(`${path}/visit-logs`, { checkId: check.checkId ?? '', goodRowsOnly: false, facts });
      if (made) note('visit_log', made.logId);
    },
    async () => {
      const made = await request(`${path}/arrival-models`, {});
      if (made) note('arrival_model', made.modelId);
    },
  ];
  return { answered, works };
}

/** What is missing or half there in a database after a kill; empty if nothing is. */
export function findLost(db: Database.Database, answered: Answered): string[] {
  const lost: string[] = [];
  for (const [table, ids] of Object.entries(answered)) {
    const sql = `SELECT count(*) AS n FROM "${table}" WHERE id IN (SELECT value FROM json_each(?))`;
    const found = db.prepare<[string], { n: number }>(sql).get(JSON.stringify(ids))?.n;
    if (found !== ids.length) lost.push(`only ${String(found)} of ${String(ids.length)} rows of ${table}`);
  }
  // A log that counts has all its rows: one that was being loaded may have some, and counts nowhere.
  const halves = db
    .prepare<[], { number: number; rows: number; n: number }>(
      `SELECT number, rows, (SELECT count(*) FROM visit WHERE logNumber = number) AS n
       FROM visit_log WHERE status = 'ready' AND rows <> n`,
    )
    .all();
  for (const { number, rows, n } of halves) {
    lost.push(`log ${String(number)} counts with ${String(n)} of ${String(rows)} rows`);
  }
  return lost;
}
