import type { Tonight } from '../../../shared/api/outlooks.ts';
import { nightOf } from '../../../shared/domain/night.ts';
import { makeZone, type Zone } from '../../../shared/domain/zoned-time.ts';
import { readCalendar } from '../../database/read-calendar.ts';
import { censusDroppedAfterSeconds, readNewestCensus } from '../../database/read-census.ts';
import { readDriftCautions } from '../../database/read-drift.ts';
import { readModelInUse } from '../../database/read-model.ts';
import { readAreas, readShifts } from '../../database/read-site.ts';
import { readPlan } from '../../database/read-staffed-beds.ts';
import type { Dependencies } from '../../dependencies.ts';
import type { Site } from '../../entities/Site.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { cautionsNow } from './cautions.ts';
import type { OutlookIssuer } from './issuer.ts';
import { coveredByLogs, readPastHours } from './past-hours.ts';
import { presentOutlook, readNewestOutlooks } from './present.ts';
import { presentAcknowledgement, readAcknowledgementsOf } from './read-acknowledgements.ts';
import { readOutlookStanding } from './read-outlook-names.ts';
import { whyMoved } from './why-moved.ts';

const pastHoursShown = 12;
/** An outlook that speaks of fewer hours than this ahead is no longer tonight's. */
const leastHoursAhead = 12;

/** Everything that the Tonight page shows, as of now. */
export async function presentTonight(
  deps: Dependencies,
  issuer: OutlookIssuer,
  site: Site,
  now: number,
): Promise<Tonight> {
  const { read } = deps.database;
  const zone = makeZone(site.timeZone);
  const areas = await readAreas(read, site.id);
  const past = await readPastHours(read, site, areas, zone, now, pastHoursShown);
  const computing = issuer.computing(site.id);
  const missing = await whyMissing(deps, site, now);
  const lastNight = await readLastNight(deps, site, zone, now);
  const acknowledged = await readAcknowledgementsOf(read, site.id, now - pastHoursShown * 3600);
  const acknowledgements = acknowledged.map(presentAcknowledgement);
  if (missing) {
    return { now, outlook: null, computing, missing, past, cautions: [], moved: null, acknowledgements, lastNight };
  }

  const [newest, before] = await readNewestOutlooks(read, site.id, 2, now);
  const outlook = await presentOutlook(read, newest);
  const older = before as typeof before | undefined;
  const names = new Map(areas.map((area) => [area.id, area.name]));
  const census = await readNewestCensus(read, site.id, now - censusDroppedAfterSeconds, now);
  const lastHour = outlook.result.hours[outlook.result.hours.length - 1];
  const logs = await read.findBy(VisitLog, { siteId: site.id, status: 'ready' });
  return {
    now,
    outlook,
    computing,
    missing: null,
    past,
    cautions: cautionsNow({
      now,
      outlook,
      areas,
      census,
      unusualDays: await readCalendar(read, site, now, lastHour),
      covered: coveredByLogs(logs, site, now),
      drift: await readDriftCautions(read, site.id),
    }),
    moved: older ? whyMoved(outlook, await presentOutlook(read, older), names, site.timeZone) : null,
    acknowledgements,
    lastNight,
  };
}

/** What stood when the night before this one began. */
async function readLastNight(deps: Dependencies, site: Site, zone: Zone, now: number): Promise<Tonight['lastNight']> {
  const { read } = deps.database;
  const shifts = await readShifts(read, site.id);
  const night = nightOf(zone, shifts, nightOf(zone, shifts, now).since - 1);
  const standing = await readOutlookStanding(read, site.id, night.from);
  // An outlook that had run out by then does not speak of the night.
  if (!standing || standing.issuedAt < night.from - leastHoursAhead * 3600) return null;
  return { outlookId: standing.id, issuedAt: standing.issuedAt };
}

async function whyMissing(deps: Dependencies, site: Site, now: number): Promise<Tonight['missing']> {
  const { read } = deps.database;
  if (!(await readModelInUse(read, site.id))) {
    return {
      reason: 'no model',
      next: 'A data steward loads a visit log and fits a model; an operations manager approves it. Then Tonight begins by itself.',
    };
  }
  if (!(await readPlan(read, site.id))) {
    return {
      reason: 'no staffed-bed plan',
      next: 'An operations manager saves the plan under Staffed beds; then Tonight begins by itself. A census entered meanwhile is kept and counts from then on.',
    };
  }
  const newest = (await readNewestOutlooks(read, site.id, 1, now)).at(0);
  if (!newest || newest.issuedAt < now - (36 - leastHoursAhead) * 3600) {
    return { reason: 'not computed yet', next: 'The outlook is being computed. It appears here by itself.' };
  }
  return null;
}
