import type { EntityManager } from 'typeorm';

/** Counts older than this are dropped. */
export const censusDroppedAfterSeconds = 8 * 3600;

/** The newest count of one area. */
export interface NewestCount {
  areaId: string;
  takenAt: number;
  present: number;
  waiting: number;
  boarding: number;
  enteredBy: string;
}

/** The newest of everything that is counted, each with its own time. */
export interface NewestCensus {
  areas: NewestCount[];
  undecided: { takenAt: number; waiting: number; ambulancesHolding: number | null } | null;
  arrivalsSinceMidnight: { takenAt: number; count: number } | null;
}

/** The newest counts of a site taken in (after, until]. Of two counts at one time the one saved later holds. */
export async function readNewestCensus(
  read: EntityManager,
  siteId: string,
  after: number,
  until: number,
): Promise<NewestCensus> {
  const areas = await read.query<NewestCount[]>(
    `SELECT areaId, takenAt, present, waiting, boarding, enteredBy FROM (
       SELECT ca.areaId, ca.takenAt, ca.present, ca.waiting, ca.boarding, c.enteredBy,
              row_number() OVER (PARTITION BY ca.areaId ORDER BY ca.takenAt DESC, ca.savedAt DESC, c.rowid DESC) AS place
       FROM census c JOIN census_area ca ON ca.censusId = c.id
       WHERE c.siteId = ? AND c.takenAt > ? AND c.takenAt <= ?
     ) WHERE place = 1`,
    [siteId, after, until],
  );
  const newest = async <T>(column: 'undecidedWaiting' | 'arrivalsSinceMidnight') =>
    (
      await read.query<T[]>(
        `SELECT takenAt, undecidedWaiting, ambulancesHolding, arrivalsSinceMidnight FROM census
         WHERE siteId = ? AND takenAt > ? AND takenAt <= ? AND ${column} IS NOT NULL
         ORDER BY takenAt DESC, savedAt DESC, rowid DESC LIMIT 1`,
        [siteId, after, until],
      )
    ).at(0);
  const undecided = await newest<{ takenAt: number; undecidedWaiting: number; ambulancesHolding: number | null }>(
    'undecidedWaiting',
  );
  const arrivals = await newest<{ takenAt: number; arrivalsSinceMidnight: number }>('arrivalsSinceMidnight');
  return {
    areas,
    undecided: undecided
      ? {
          takenAt: undecided.takenAt,
          waiting: undecided.undecidedWaiting,
          ambulancesHolding: undecided.ambulancesHolding,
        }
      : null,
    arrivalsSinceMidnight: arrivals ? { takenAt: arrivals.takenAt, count: arrivals.arrivalsSinceMidnight } : null,
  };
}
