import type { Zone } from '../domain/zoned-time.ts';
import { collectStays, tallyStays } from './collect-stays.ts';
import type { CollectedStays, StayTallies } from './collect-stays.ts';
import { fitBedSpace } from './fit-bed-space.ts';
import { fitDecisionStage, stagedAreas } from './fit-decision-stage.ts';
import { reportHeaping } from './heaping.ts';
import { fitStreams } from './fit-streams.ts';
import { fitOutflowByDay } from './outflow-by-day.ts';
import { cutBlocks, holidayNumbers } from './stay-clock.ts';
import { admittedStream, boardingStream, streamsPerArea } from './stay-model.ts';
import type { StayModel } from './stay-model.ts';
import { compensateStays, operationalClock } from './stay-compensator.ts';
import { fitStayShapes } from './stay-shape.ts';
import { shrinkShares } from './stay-shrinkage.ts';
import type { CalendarDay, ExposureGap, ExtractFacts, VisitTable } from './visit-table.ts';

/** What a fit of length of stay needs. Instants are UTC seconds. */
export interface StayFitRequest {
  visits: VisitTable;
  /** Number of care areas. */
  areas: number;
  zone: Zone;
  /** The period that the log covers. */
  window: { from: number; to: number };
  facts: ExtractFacts;
  /** Stays are censored here, hours; 72 by default. */
  capHours?: number;
  /** Blocks of the day with a departure factor each, hours; a divisor of 24; 2 by default. */
  blockHours?: number;
  gaps?: readonly ExposureGap[];
  /** Public holidays among them count as weekend. */
  calendar?: readonly CalendarDay[];
  onProgress?: (share: number) => void;
}

const shareBlockHours = 4;
const rounds = 4;

function check(request: StayFitRequest, capHours: number, blockHours: number): void {
  const { areas, window, facts } = request;
  if (!Number.isInteger(areas) || areas < 1 || areas > 255) throw new RangeError(`areas must be 1..255, got ${areas}`);
  if (!(window.to > window.from)) throw new RangeError(`window must end after it starts: ${window.from}..${window.to}`);
  if (!(capHours > 0 && capHours <= 720)) throw new RangeError(`capHours must lie in (0, 720], got ${capHours}`);
  if (!(blockHours >= 1 && 24 % blockHours === 0)) throw new RangeError(`blockHours must divide 24, got ${blockHours}`);
  if (!Number.isFinite(facts.takenAt)) throw new RangeError(`facts.takenAt must be an instant, got ${facts.takenAt}`);
}

/**
 * Fits how long patients stay: streams of area and disposition (and boarding, where admission decisions are loaded),
 * with departure hazard μ·g(block of the day, weekday or weekend)·f(day), f a slowly varying outflow factor. The hazard's
 * maximum likelihood is departures / time at risk, right-censored at the cap; block factors are held to 1 by empirical
 * Bayes, hazards of small streams to the site's hazard of their disposition by the weight of one departure; μ, g and f
 * are fitted in turn. A window shorter than four caps lowers the cap (censoring earlier is as valid, only less sharp).
 * @throws RangeError naming a bad parameter, or when no visit can be used.
 * Cost: linear in visits: about 0.5 s for 450,000.
 */
export function fitStays(request: StayFitRequest): StayModel {
  const { visits, areas, zone, window, facts, gaps = [], calendar = [], onProgress } = request;
  const blockHours = request.blockHours ?? 2;
  check(request, request.capHours ?? 72, blockHours);
  const end = facts.selectedBy === 'arrived' ? Math.min(window.to, facts.takenAt) : window.to;
  const spanHours = (end - window.from) / 3600;
  const capHours = Math.min(request.capHours ?? 72, Math.max(1, spanHours / 4));
  const complete = facts.selectedBy === 'arrived' ? facts.takenAt : window.to;
  const to = Math.min(end, complete - capHours * 3600);
  if (!(to > window.from)) throw new RangeError('window is too short to learn lengths of stay from');
  const holidays = calendar.filter((day) => day.kind === 'public holiday').map((day) => day.date);
  const holidaySet = holidayNumbers(holidays);
  const stays = collectStays({ visits, areas, zone, from: window.from, to, capHours, shareBlockHours, facts, gaps });
  if (stays.length === 0) throw new RangeError('no visit in the window has a usable length of stay');
  onProgress?.(0.3);
  const cells = cutBlocks(zone, window.from, to + capHours * 3600 + 1, blockHours, holidaySet);
  const tallies = tallyStays(stays, cells, blockHours, areas * streamsPerArea);
  spreadUnknown(stays, tallies, areas, capHours);
  onProgress?.(0.6);
  // Days with steady state only: the first cap fills up and the last one runs empty.
  const staged = stagedAreas(stays, areas);
  const outflow = fitOutflowByDay(
    cells,
    { from: window.from, to },
    staged,
    (factor) => fitStreams(tallies, factor, cells.block, blockHours),
    rounds,
    tallies,
    (streams, factorByCell) => {
      const clock = operationalClock(cells, streams, factorByCell);
      const shapes = fitStayShapes(stays, cells, blockHours, clock);
      return compensateStays(stays, cells, blockHours, { clock, shapes, factorByCell });
    },
  );
  const { streams, factorByCell } = outflow;
  const clock = operationalClock(cells, streams, factorByCell);
  const shapes = fitStayShapes(stays, cells, blockHours, clock);
  streams.forEach((stream, index) => {
    stream.shape = shapes[index];
  });
  onProgress?.(0.9);
  const site = [1, 1, 1, 1].map((one, d) => stays.arrivalsByBlock.reduce((sum, n) => sum + sumEvery(n, d), one));
  const siteTotal = site.reduce((sum, value) => sum + value, 0);
  const prior = site.map((value) => value / siteTotal);
  const used = (row: number): boolean => visits.arrivalAt[row] >= window.from && visits.arrivalAt[row] < to;
  const model: StayModel = {
    areas,
    capHours,
    blockHours,
    shareBlockHours,
    outflowDayStartsAt: outflow.dayStartsAt,
    holidays,
    usedFrom: window.from,
    usedTo: to,
    streams,
    shareBeforeDecision: Array.from(stays.decision.whole, (whole, area) =>
      whole > 0 ? stays.decision.before[area] / whole : null,
    ),
    ...fitDecisionStage(stays, staged, cells, blockHours, {
      others: factorByCell(0),
      admitted: factorByCell(admittedStream),
    }),
    shares: stays.arrivalsByBlock.map((counts, area) => ({ area, alpha: shrinkShares(counts, prior) })),
    outflow: { others: outflow.others, admitted: outflow.admitted },
    bedSpace: fitBedSpace(visits, areas, capHours, used),
    heaping: reportHeaping(visits, zone),
    leftOut: stays.leftOut,
    overCapShare: 0,
    cautions: [],
  };
  const whole = streams.filter((stream) => stream.stream !== boardingStream);
  const visitsUsed = whole.reduce((sum, stream) => sum + stream.visits, 0);
  model.overCapShare = visitsUsed > 0 ? whole.reduce((sum, stream) => sum + stream.censored, 0) / visitsUsed : 0;
  model.cautions = cautionsOf(model, request.capHours ?? 72);
  onProgress?.(1);
  return model;
}

function sumEvery(counts: Float64Array, disposition: number): number {
  let sum = 0;
  for (let i = disposition; i < counts.length; i += 4) sum += counts[i];
  return sum;
}

/** Stays over the cap whose disposition nobody knows: their time at risk goes to the area's streams by who is over the cap there. */
function spreadUnknown(stays: CollectedStays, tallies: StayTallies, areas: number, capHours: number): void {
  for (let area = 0; area < areas; area += 1) {
    const unknown = stays.unknownOverCap[area];
    if (unknown === 0) continue;
    const over = [0, 1, 2, 3].map((d) => tallies.censored[area * streamsPerArea + d] + 0.25);
    const total = over.reduce((sum, value) => sum + value, 0);
    over.forEach((count, d) => {
      const index = area * streamsPerArea + d;
      const risk = tallies.hoursAtRisk[index];
      const sum = risk.reduce((a, b) => a + b, 0);
      const extra = (unknown * count * capHours) / total;
      if (sum > 0) for (let c = 0; c < risk.length; c += 1) risk[c] *= 1 + extra / sum;
      tallies.visits[index] += (unknown * count) / total;
      tallies.censored[index] += (unknown * count) / total;
    });
  }
}

function cautionsOf(model: StayModel, askedCap: number): string[] {
  const cautions: string[] = [];
  if (model.capHours < askedCap) {
    cautions.push(`The log is short: stays are followed for ${String(Math.round(model.capHours))} hours only.`);
  }
  const weeks = (model.usedTo - model.usedFrom) / (7 * 86_400);
  if (weeks < 8)
    cautions.push('Fewer than eight weeks of stays: departures by hour and day-to-day outflow are coarse.');
  if (model.overCapShare > 0.02) {
    const percent = (100 * model.overCapShare).toFixed(1);
    cautions.push(
      `${percent} % of stays last longer than ${String(model.capHours)} hours and were followed only until then.`,
    );
  }
  if (model.heaping.departuresOnTheHour > 0.1) {
    cautions.push('Many departures are logged at full hours: times look rounded or entered later.');
  }
  if (model.heaping.departuresAt2359 > 10 * Math.max(model.heaping.expectedAt2359, 1e-5)) {
    cautions.push('Many departures are logged at 23:59: the system seems to close visits at midnight.');
  }
  return cautions;
}
