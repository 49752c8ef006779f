import type { Disposition } from '../shared/domain/disposition.ts';
import { makeZone } from '../shared/domain/zoned-time.ts';
import { drawGamma } from '../shared/stochastic/gamma.ts';
import { drawPoisson } from '../shared/stochastic/poisson.ts';
import { makeStream } from '../shared/stochastic/random.ts';
import type { RandomStream } from '../shared/stochastic/random.ts';
import { outages } from './farrowmere-calendar.ts';
import { makeSiteHours } from './site-hours.ts';
import type { SiteHour } from './site-hours.ts';
import { siteProcesses } from './visit-process.ts';
import type { AreaProcess, GammaHours } from './visit-process.ts';

/** One visit as the patient system wrote it; instants in UTC seconds, whole minutes. */
export interface DemoVisit {
  areaId: string;
  arrivalAt: number;
  /** Null: none yet, or none ever (left before treatment). */
  bedSpaceAt: number | null;
  admissionDecisionAt: number | null;
  /** Null: still present at the end of the window. */
  departureAt: number | null;
  /** Null while still present. */
  disposition: Disposition | null;
  byAmbulance: boolean;
}

export interface VisitLogWindow {
  site: { id: string; timeZone: string };
  /** Arrivals in [from, to), UTC seconds; nothing at or after `to` is known yet. */
  from: number;
  to: number;
  seed: number;
  /** Also the visits that the patient system missed in its outages (for a head count). Default false. */
  withUnrecorded?: boolean;
}

const arrivalsPath = 6;

/**
 * The visits of a site that arrived in a window, in order of arrival.
 *
 * Arrivals are Poisson by UTC hour and area, with a rate that follows the hour of week, season, slow level, holidays, one
 * fair, and autoregressive day factors shared by the site and of each area. A stay is a wait for a bed space, then
 * treatment at the pace of the hour, for the admitted a decision and then boarding at the pace of the wards, whose bad
 * days follow one another. Waits and the share that leaves before treatment grow with how busy the hours before were.
 *
 * Each hour and area has its own random stream made of the seed and the hour, so a visit is the same in every window that
 * holds its arrival; only what lies at or after `to` is left out. Cost: about 8 µs a visit.
 */
export function makeVisitLog({ site, from, to, seed, withUnrecorded = false }: VisitLogWindow): DemoVisit[] {
  if (!(to > from)) throw new RangeError('the window must end after it starts');
  const zone = makeZone(site.timeZone);
  const hours = makeSiteHours(site.id, zone, seed);
  const { streamKey, areas } = siteProcesses[site.id];
  const silent = withUnrecorded ? [] : outages(site.id, zone, from, to);
  const visits: DemoVisit[] = [];
  for (let hour = Math.floor(from / 3600); hour * 3600 < to; hour += 1) {
    const drawn: DemoVisit[] = [];
    for (const [index, area] of areas.entries()) {
      const stream = makeStream(seed, streamKey, arrivalsPath, index, hour);
      const count = drawPoisson(stream, hours(hour).rates[index]);
      if (count === 0) continue;
      const busy = busyness(area, index, hour, hours);
      for (let i = 0; i < count; i += 1) drawn.push(drawVisit(area, hour, busy, stream, hours));
    }
    drawn.sort((a, b) => a.arrivalAt - b.arrivalAt);
    for (const visit of drawn) {
      const { arrivalAt } = visit;
      if (arrivalAt < from || arrivalAt >= to) continue;
      if (silent.some((outage) => arrivalAt >= outage.from && arrivalAt < outage.to)) continue;
      visits.push(knownAt(visit, to));
    }
  }
  return visits;
}

/** What is known of a visit at an instant. */
function knownAt(visit: DemoVisit, at: number): DemoVisit {
  if (visit.departureAt !== null && visit.departureAt < at) return visit;
  const known = (instant: number | null) => (instant !== null && instant < at ? instant : null);
  return {
    ...visit,
    bedSpaceAt: known(visit.bedSpaceAt),
    admissionDecisionAt: known(visit.admissionDecisionAt),
    departureAt: null,
    disposition: null,
  };
}

/** How busy an area is: arrivals of the last three hours against its mean, and how slowly the wards take patients. */
function busyness(area: AreaProcess, index: number, hour: number, hours: (hour: number) => SiteHour): number {
  const recent = (hours(hour - 2).rates[index] + hours(hour - 1).rates[index] + hours(hour).rates[index]) / 3;
  const inflow = (recent * 24) / area.arrivalsPerDay;
  return Math.pow(inflow, 0.8) * Math.pow(hours(hour).wardPace + 0.3, -0.25);
}

function drawVisit(
  area: AreaProcess,
  hour: number,
  busy: number,
  stream: RandomStream,
  hours: (hour: number) => SiteHour,
): DemoVisit {
  const arrivalAt = toMinute(hour * 3600 + stream.uniform() * 3600);
  const byAmbulance = stream.uniform() < area.ambulanceShare;
  const ends = chooseDisposition(area, hours(hour).hourOfDay, busy, byAmbulance, stream.uniform(), stream.uniform());
  const visit = {
    areaId: area.areaId,
    arrivalAt,
    bedSpaceAt: null,
    admissionDecisionAt: null,
    disposition: ends,
    byAmbulance,
  };
  if (ends === 'left before treatment') {
    const patience = drawHours(stream, { shape: 2, mean: 1.9 }) * Math.pow(busy, 0.3);
    return { ...visit, departureAt: after(arrivalAt, arrivalAt + patience * 3600) };
  }
  const wait = drawHours(stream, area.wait) * Math.pow(busy, 1.2) * (byAmbulance ? 0.55 : 1.1);
  const bedSpaceAt = toMinute(arrivalAt + wait * 3600);
  if (ends === 'admitted') {
    const decisionAt = toMinute(walk(bedSpaceAt, drawHours(stream, area.decision), hours, 'treatmentPace'));
    // A quarter of an hour at least for the way to the ward.
    const leavesAt = walk(decisionAt + 900, drawHours(stream, area.boarding), hours, 'wardPace');
    return { ...visit, bedSpaceAt, admissionDecisionAt: decisionAt, departureAt: after(decisionAt, leavesAt) };
  }
  const kind = area.treatment[stream.uniform() < area.slowShare ? 1 : 0];
  const work = drawHours(stream, kind) + (ends === 'transferred' ? 1.2 : 0);
  return { ...visit, bedSpaceAt, departureAt: after(bedSpaceAt, walk(bedSpaceAt, work, hours, 'treatmentPace')) };
}

function chooseDisposition(
  area: AreaProcess,
  hourOfDay: number,
  busy: number,
  byAmbulance: boolean,
  first: number,
  second: number,
): Disposition {
  const left = Math.min(0.25, area.left * Math.pow(busy, 1.6)) * (byAmbulance ? 0.2 : 1);
  if (first < left) return 'left before treatment';
  // Who comes by ambulance is admitted about twice as often as who walks in; the area's share is kept.
  const lean = byAmbulance ? 1.4 : (1 - 1.4 * area.ambulanceShare) / (1 - area.ambulanceShare);
  const admitted = Math.min(0.95, area.admitted[Math.floor(hourOfDay / 6)] * (area.ambulanceShare < 0.6 ? lean : 1));
  if (second < admitted) return 'admitted';
  return second < admitted + area.transferred ? 'transferred' : 'home';
}

function drawHours(stream: RandomStream, { shape, mean }: GammaHours): number {
  return (drawGamma(stream, shape) * mean) / shape;
}

/** The instant at which `work` hours are done, when each hour of the clock does `pace` of them. */
function walk(
  from: number,
  work: number,
  hours: (hour: number) => SiteHour,
  pace: 'treatmentPace' | 'wardPace',
): number {
  let at = from;
  let left = work;
  for (;;) {
    const hour = Math.floor(at / 3600);
    const rate = hours(hour)[pace];
    const end = (hour + 1) * 3600;
    const done = ((end - at) / 3600) * rate;
    if (done >= left) return at + (left / rate) * 3600;
    left -= done;
    at = end;
  }
}

function toMinute(seconds: number): number {
  return Math.floor(seconds / 60) * 60;
}

/** To the minute, at least one minute after an earlier event. */
function after(earlier: number, seconds: number): number {
  return Math.max(earlier + 60, toMinute(seconds));
}
