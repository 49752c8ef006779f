import { makeZone } from '../domain/zoned-time.ts';
import type { Zone } from '../domain/zoned-time.ts';
import type { ArrivalModel, LiveArrivals, RateGrid } from './arrival-model.ts';
import { expectedPresent } from './census-start.ts';
import type { ExpectedPresent, ModelledPast } from './census-start.ts';
import { outflowPlace, presentByStage, stagedStays, withDecisions } from './decision-stage.ts';
import type { StagedStays } from './decision-stage.ts';
import { checkOutlookInput } from './check-outlook-input.ts';
import { binSeconds } from './need-plan.ts';
import type { AreaPlan, NeedPlan } from './need-plan.ts';
import { areaFlows } from './need-flows.ts';
import type { AreaFlows } from './need-flows.ts';
import type { BedStep, OutlookInput } from './outlook-types.ts';
import { smallAreaSpaces } from './printed-shortfall.ts';
import { expectedRates, makeRateDraw } from './rate-draws.ts';
import { makeRateGrid } from './rate-grid.ts';
import { blockOf, holidayNumbers } from './stay-clock.ts';
import { expectedStays, makeSpentDraw, staySegments } from './stay-draw.ts';
import { admittedStream, streamsPerArea } from './stay-model.ts';
import type { StayModel, StayShape } from './stay-model.ts';
import { arrivalMix, meansByFactor, startFactors, startGroups } from './start-groups.ts';
import { chooseStayLaw } from './stay-choice.ts';
import { endOfTonight } from './tonight-span.ts';
import type { CalendarDay } from './visit-table.ts';
import { withCalendar } from './with-calendar.ts';

/** The fitted models that an outlook stands on. */
export interface OutlookModel {
  arrival: ArrivalModel;
  stay: StayModel;
  calendar: readonly CalendarDay[];
}

/** A plan and what the pages are told about it. */
export interface PreparedNeed {
  plan: NeedPlan;
  lengthOfStay: 'exponential' | 'empirical';
  live: LiveArrivals | null;
  /** Expected flows and patients present, exponential stays: what the exact method starts from. */
  flows: AreaFlows[];
  stay: StagedStays;
  expected: ExpectedPresent[];
}

const pastHours = 96;

/** Cuts a grid at further instants; an instant within a stretch makes two stretches of one label. */
export function cutGrid(grid: RateGrid, instants: readonly number[]): RateGrid {
  const localHour: number[] = [];
  const startAt: number[] = [];
  const hours: number[] = [];
  const cuts = [...new Set(instants)].sort((a, b) => a - b);
  for (let k = 0; k < grid.startAt.length; k += 1) {
    let from = grid.startAt[k];
    const to = from + grid.hours[k] * 3600;
    for (const cut of [...cuts.filter((at) => at > from && at < to - 1e-6), to]) {
      localHour.push(grid.localHour[k]);
      startAt.push(from);
      hours.push((cut - from) / 3600);
      from = cut;
    }
  }
  return {
    localHour: Int32Array.from(localHour),
    startAt: Float64Array.from(startAt),
    hours: Float64Array.from(hours),
  };
}

/** Beds in force at an instant. */
function bedsAt(steps: readonly BedStep[], at: number): number {
  let beds = steps[0].beds;
  for (const step of steps) if (step.at <= at) beds = step.beds;
  return beds;
}

function liveOf(input: OutlookInput, zone: Zone, startAt: number): LiveArrivals | null {
  const since = input.arrivalsSince;
  if (since === null) return null;
  const to = Math.min(since.to, startAt);
  if (!(to > since.from) || !(since.count >= 0)) return null;
  // What was counted past the forecast's start is taken away in proportion to time.
  const total = Math.round((since.count * (to - since.from)) / (since.to - since.from));
  return { grid: makeRateGrid(zone, since.from, to), total };
}

/**
 * Makes everything that replications need from fitted models and an outlook's input: segments cut at local hours and
 * census times, expected patients present, beds by bin, and the draws. The same input gives the same plan on any thread.
 * @throws RangeError naming a bad input. Cost: a few ms.
 */
export function prepareNeed(model: OutlookModel, input: OutlookInput): PreparedNeed {
  const { arrival, stay: fitted, calendar } = withCalendar(model, input);
  const stay = stagedStays(fitted);
  checkOutlookInput(input, stay.areas);
  if (arrival.areas.length !== stay.areas) {
    throw new RangeError(`arrival model has ${arrival.areas.length} areas, stay model ${stay.areas}`);
  }
  const zone = makeZone(input.timeZone);
  const { issuedAt, hours } = input;
  const starts = input.areas.map((area) => area.census?.takenAt ?? issuedAt);
  const undecidedAt = input.undecided === null ? issuedAt : input.undecided.takenAt;
  const first = Math.min(issuedAt, undecidedAt, ...starts);
  const startAt = Math.floor(first / binSeconds) * binSeconds;
  const endAt = hours[hours.length - 1];
  const grid = cutGrid(makeRateGrid(zone, startAt, endAt), [...starts, undecidedAt]);
  const segments = grid.hours.length;
  const holidays = holidayNumbers(stay.holidays.concat(publicHolidays(calendar)));
  const blockAt = (localHour: number): number => blockOf(localHour, stay.blockHours, holidays);
  const staying = staySegments(stay, grid.localHour, blockAt);
  const live = liveOf(input, zone, startAt);
  const rates = expectedRates(arrival, grid, calendar, live ?? undefined);
  const means = expectedStays(stay, staying);
  const segmentAt = Float64Array.from({ length: segments + 1 }, (_, k) =>
    k < segments ? (grid.startAt[k] - startAt) / 3600 : (endAt - startAt) / 3600,
  );
  const segmentOf = (at: number): number =>
    Math.min(
      segments - 1,
      grid.startAt.findIndex((start) => start >= at),
    );

  const pastGrid = makeRateGrid(zone, startAt - Math.min(pastHours, stay.capHours) * 3600, startAt);
  const pastStaying = staySegments(stay, pastGrid.localHour, blockAt);
  const pastRates = expectedRates(arrival, pastGrid, calendar);
  const pastMeans = expectedStays(stay, pastStaying);
  const bins = Math.round((endAt - startAt) / binSeconds);

  const flows = input.areas.map((_, a): AreaFlows => {
    const startSegment = segmentOf(starts[a]);
    return areaFlows(
      stay,
      a,
      { hours: pastGrid.hours, rate: pastRates[a], staying: pastStaying, draw: pastMeans },
      { hours: grid.hours, rate: rates[a], staying, draw: means },
      startSegment,
    );
  });
  const shapesOf = (a: number): (StayShape | null)[] =>
    stay.streams.slice(a * streamsPerArea, (a + 1) * streamsPerArea).map((stream) => stream.shape);
  const presentBy = (a: number, shapes: (StayShape | null)[]): ExpectedPresent =>
    (stay.staged[a] ? presentByStage : expectedPresent)(flows[a].past, shapes);
  const plain = flows.map((_, a) => presentBy(a, new Array<null>(streamsPerArea).fill(null)));
  const shaped = flows.map((_, a) => presentBy(a, shapesOf(a)));
  const night = Math.min(endAt, endOfTonight(input.shifts, issuedAt, zone));
  const lengthOfStay = chooseStayLaw(stay, input, flows, plain, shaped, shapesOf, (night - startAt) / 3600);
  const empirical = lengthOfStay === 'empirical';
  const lawOf = (a: number): StayShape | null => (empirical ? shapesOf(a)[admittedStream] : null);
  const pastOf = (a: number): ModelledPast => (stay.staged[a] ? withDecisions(flows[a].past, lawOf(a)) : flows[a].past);

  const areas = input.areas.map((area, a): AreaPlan => {
    const present = empirical ? shaped[a] : plain[a];
    const groups = area.census === null ? [] : startGroups(stay, a, area.census, present, flows[a].past, lawOf(a));
    const expectedFirstRate = rates[a][flows[a].startSegment];
    return {
      startHours: (starts[a] - startAt) / 3600,
      startSegment: flows[a].startSegment,
      groups,
      startMeans: area.census === null ? meansByFactor(pastOf(a), empirical ? shapesOf(a) : null) : null,
      startFactors,
      expectedFirstRate,
      remaining: present.remaining,
      shapes: shapesOf(a).map((shape) => (empirical ? shape : null)),
      beds: Int32Array.from({ length: bins }, (_, b) => bedsAt(area.staffedBeds, startAt + (b + 1) * binSeconds)),
      highest: highestNeed(flows[a], present, area.census?.present ?? 0, input.undecided?.waiting ?? 0),
      boarders: area.census?.boarding ?? 0,
      staged: stay.staged[a],
      outflowPlaces: Array.from({ length: streamsPerArea }, (_, s) =>
        outflowPlace(stay, stay.streams[a * streamsPerArea + s].stream),
      ),
      wholeHour: area.spaces <= smallAreaSpaces,
    };
  });
  checkWork(areas, input, flows);
  const binAt = (at: number): number => Math.min(bins, Math.max(0, Math.ceil((at - startAt) / binSeconds)));
  const firstBin = Math.floor((issuedAt - startAt) / binSeconds);
  const hourFrom = Int32Array.from(hours, (at, h) =>
    Math.max(firstBin, h === 0 ? binAt(at - 3600) : binAt(hours[h - 1])),
  );
  const hourTo = Int32Array.from(hours, binAt);
  const plan: NeedPlan = {
    seed: input.seed,
    startAt,
    segments,
    segmentAt,
    shareBlock: staying.shareBlock,
    shareBlocks: 24 / stay.shareBlockHours,
    areas,
    undecided:
      input.undecided === null || input.undecided.waiting === 0
        ? null
        : {
            patients: input.undecided.waiting,
            startHours: (undecidedAt - startAt) / 3600,
            startSegment: segmentOf(undecidedAt),
            steps: arrivalMix(flows, segmentOf(undecidedAt)),
          },
    bins,
    hourFrom,
    hourTo,
    hourOfBin: hoursOfBins(bins, hourFrom, hourTo),
    // A bin ends at (b + 1) · 300 s: a shift owns the ends from its start, not the one at its end, where the next one's beds count.
    shiftFrom: Int32Array.from(input.shifts, (shift) => Math.max(firstBin, binAt(shift.from) - 1, 0)),
    shiftTo: Int32Array.from(input.shifts, (shift) => Math.max(0, binAt(shift.to) - (shift.to <= endAt ? 1 : 0))),
    nightTo: binAt(night),
    drawRates: makeRateDraw(arrival, grid, calendar, live ?? undefined),
    drawStays: makeSpentDraw(stay, staying, grid.hours),
  };
  return { plan, lengthOfStay, live, flows, stay, expected: plain };
}

function publicHolidays(calendar: readonly CalendarDay[]): string[] {
  return calendar.filter((day) => day.kind === 'public holiday').map((day) => day.date);
}

/** Hour of every bin, from 1 on; 0 outside the hours. */
export function hoursOfBins(bins: number, hourFrom: Int32Array, hourTo: Int32Array): Uint16Array {
  const hourOfBin = new Uint16Array(bins + 1);
  hourFrom.forEach((from, h) => hourOfBin.fill(h + 1, from, hourTo[h]));
  return hourOfBin;
}

/** Room in the histograms: far beyond what parameter, outflow and arrival variation can reach. */
function highestNeed(flow: AreaFlows, present: ExpectedPresent, counted: number, undecided: number): number {
  const modelled = present.means.reduce((sum, value) => sum + value, 0);
  const most = Math.max(modelled, flow.peakNewcomers) + counted + undecided;
  return Math.min(4000, Math.ceil(2 * most + 8 * Math.sqrt(most) + 24));
}

const mostPatients = 2e9;

function checkWork(areas: readonly AreaPlan[], input: OutlookInput, flows: readonly AreaFlows[]): void {
  const arrivals = flows.reduce((sum, flow) => sum + flow.arrivals, 0);
  const patients = (arrivals + areas.reduce((sum, area) => sum + area.highest, 0)) * input.replications;
  if (!(patients < mostPatients)) {
    throw new RangeError(
      `rates and replications together mean ${patients.toPrecision(2)} patients: too many to simulate`,
    );
  }
}
