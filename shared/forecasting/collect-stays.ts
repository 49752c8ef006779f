import type { Zone } from '../domain/zoned-time.ts';
import { admittedStream, boardingStream, streamsPerArea } from './stay-model.ts';
import type { StayModel } from './stay-model.ts';
import type { BlockCells } from './stay-clock.ts';
import { cellAt } from './stay-clock.ts';
import type { ExposureGap, ExtractFacts, VisitTable } from './visit-table.ts';

const thirtyDays = 30 * 86_400;
const unknownDisposition = 255;

/** Stays to learn from: intervals in a stream, ended by a departure or by censoring. A boarding stay stands just after its whole stay. */
export interface CollectedStays {
  length: number;
  /** Index of the stream: area · streamsPerArea + stream. */
  stream: Uint16Array;
  startAt: Float64Array;
  endAt: Float64Array;
  /** 1 departed, 0 censored at the cap. */
  departed: Uint8Array;
  /** Stays that outlast the cap and whose disposition nobody knows yet, by area. */
  unknownOverCap: Float64Array;
  /** Visits used, by stream, and arrivals by block of the day of arrival for the shares: [area][block · 4 + disposition]. */
  arrivalsByBlock: Float64Array[];
  /** Sums over admitted patients with a decision time: hours before the decision and hours of the whole stay, by area. */
  decision: { before: Float64Array; whole: Float64Array };
  leftOut: StayModel['leftOut'];
}

/** What to collect, and how. Instants are UTC seconds. */
export interface CollectRequest {
  visits: VisitTable;
  areas: number;
  zone: Zone;
  /** Arrivals at or after `from` and before `to` are used: the caller has taken the last `cap` hours away. */
  from: number;
  to: number;
  capHours: number;
  shareBlockHours: number;
  facts: ExtractFacts;
  gaps: readonly ExposureGap[];
}

/**
 * Turns visits into stays to learn from. Only arrivals older than the cap are taken, so that every stay has either
 * ended (its disposition is known) or is censored at the cap: recent short stays cannot crowd out long ones. Arrivals
 * that an outage could have cut short are left out as a whole, by time of arrival only, which selects no stay by its length.
 */
export function collectStays(request: CollectRequest): CollectedStays {
  const { visits, areas, zone, from, to, facts, gaps } = request;
  const cap = request.capHours * 3600;
  const blocks = 24 / request.shareBlockHours;
  const most = visits.length * 2;
  const stream = new Uint16Array(most);
  const startAt = new Float64Array(most);
  const endAt = new Float64Array(most);
  const departed = new Uint8Array(most);
  const unknownOverCap = new Float64Array(areas);
  const arrivalsByBlock = Array.from({ length: areas }, () => new Float64Array(blocks * 4));
  const decision = { before: new Float64Array(areas), whole: new Float64Array(areas) };
  const leftOut = {
    endsBeforeStart: 0,
    over30Days: 0,
    outsideWindow: 0,
    inGap: 0,
    departureUnknown: 0,
    dispositionUnknown: 0,
  };
  let length = 0;
  function add(index: number, start: number, end: number): void {
    const over = end - start > cap;
    stream[length] = index;
    startAt[length] = start;
    endAt[length] = over ? start + cap : end;
    departed[length] = over ? 0 : 1;
    length += 1;
  }
  for (let row = 0; row < visits.length; row += 1) {
    const area = visits.area[row];
    const arrival = visits.arrivalAt[row];
    if (!(arrival >= from && arrival < to) || area >= areas) {
      leftOut.outsideWindow += 1;
      continue;
    }
    if (gaps.length > 0 && inGap(gaps, area, arrival, cap)) {
      leftOut.inGap += 1;
      continue;
    }
    const departure = visits.departureAt[row];
    const disposition = visits.disposition[row];
    if (Number.isNaN(departure)) {
      if (facts.missingDeparture === 'unknown') leftOut.departureUnknown += 1;
      else if (disposition === unknownDisposition) unknownOverCap[area] += 1;
      else add(area * streamsPerArea + disposition, arrival, arrival + cap + 1);
      continue;
    }
    if (departure < arrival) {
      leftOut.endsBeforeStart += 1;
      continue;
    }
    if (departure - arrival > thirtyDays) {
      leftOut.over30Days += 1;
      continue;
    }
    if (disposition >= 4) {
      leftOut.dispositionUnknown += 1;
      continue;
    }
    add(area * streamsPerArea + disposition, arrival, departure);
    const hourOfDay = (((Math.floor(zone.toLocal(arrival) / 3600) % 24) + 24) % 24) / request.shareBlockHours;
    arrivalsByBlock[area][Math.floor(hourOfDay) * 4 + disposition] += 1;
    const decided = visits.admissionDecisionAt[row];
    if (disposition === admittedStream && decided >= arrival && decided <= departure) {
      add(area * streamsPerArea + boardingStream, decided, departure);
      decision.before[area] += (decided - arrival) / 3600;
      decision.whole[area] += (departure - arrival) / 3600;
    }
  }
  return {
    length,
    stream: stream.subarray(0, length),
    startAt: startAt.subarray(0, length),
    endAt: endAt.subarray(0, length),
    departed: departed.subarray(0, length),
    unknownOverCap,
    arrivalsByBlock,
    decision,
    leftOut,
  };
}

function inGap(gaps: readonly ExposureGap[], area: number, arrival: number, cap: number): boolean {
  return gaps.some((gap) => (gap.area === null || gap.area === area) && arrival >= gap.from - cap && arrival < gap.to);
}

/** Departures and hours at risk of every stream in every cell, [stream][cell]: all that the exponential fit needs. */
export interface StayTallies {
  departures: Float64Array[];
  hoursAtRisk: Float64Array[];
  visits: Float64Array;
  censored: Float64Array;
}

/** Adds up departures and time at risk by cell. Cost: linear in stays times the cells a stay crosses. */
export function tallyStays(stays: CollectedStays, cells: BlockCells, blockHours: number, streams: number): StayTallies {
  const count = cells.block.length;
  const departures = Array.from({ length: streams }, () => new Float64Array(count));
  const hoursAtRisk = Array.from({ length: streams }, () => new Float64Array(count));
  const visits = new Float64Array(streams);
  const censored = new Float64Array(streams);
  const { startAt } = cells;
  for (let i = 0; i < stays.length; i += 1) {
    const index = stays.stream[i];
    const risk = hoursAtRisk[index];
    const end = stays.endAt[i];
    let at = stays.startAt[i];
    let cell = cellAt(cells, at, blockHours);
    while (cell < count - 1 && startAt[cell + 1] < end) {
      risk[cell] += (startAt[cell + 1] - at) / 3600;
      at = startAt[cell + 1];
      cell += 1;
    }
    risk[cell] += (end - at) / 3600;
    visits[index] += 1;
    if (stays.departed[i] === 1) departures[index][cell] += 1;
    else censored[index] += 1;
  }
  return { departures, hoursAtRisk, visits, censored };
}
