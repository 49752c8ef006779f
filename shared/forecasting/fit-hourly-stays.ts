import { fitCensoredExponential } from '../stochastic/censored-exponential.ts';
import type { Zone } from '../domain/zoned-time.ts';
import type { StayTallies } from './collect-stays.ts';
import type { CountedHours } from './counted-hours.ts';
import { countedRuns, patientHoursOf, type AreaRuns } from './counted-runs.ts';
import { fitStreams } from './fit-streams.ts';
import { fitOutflowByDay } from './outflow-by-day.ts';
import { cellAt, cutBlocks, holidayNumbers, type BlockCells } from './stay-clock.ts';
import { admittedStream, blockHazards, boardingStream, streamsPerArea } from './stay-model.ts';
import type { OutflowFactor, StayModel, StayStream } from './stay-model.ts';
import type { CalendarDay, ExposureGap } from './visit-table.ts';

/** What a fit of stays on hourly counts needs. Instants are UTC seconds. */
export interface HourlyStayRequest {
  counted: CountedHours;
  areas: number;
  zone: Zone;
  window: { from: number; to: number };
  gaps: readonly ExposureGap[];
  /** Stated mean stays by place of the area, hours. */
  stated: ReadonlyMap<number, { meanHours: number }>;
  capHours: number;
  calendar: readonly CalendarDay[];
}

export type StaySource = 'departures by hour' | 'stated mean';

const blockHours = 2;
const shareBlockHours = 4;
const rounds = 4;
/** A stated mean is held as the mean of so many stays: ± 20 % (standard deviation). An assumption, no source. */
const statedStrength = 25;
/** Stands in where an area has no arrival, so that nothing depends on it. */
const usualMeanHours = 4;
/** Nothing is known of the hours of the day: each block's pace is held to the mean as by so many departures, ± 14 %. */
const statedBlockStrength = 50;
/** Days differ by ± 10 % in how fast patients leave. An assumption, no source. */
const statedOutflow: OutflowFactor = {
  variance: 0.01,
  varianceSe: 0.005,
  correlation: 0.5,
  correlationSe: 0.3,
  levelSe: 0,
  days: 0,
};

/**
 * Length of stay from hourly counts and stated means. Departures by hour do not tell the mean: how many were there at the
 * start is not in them, and days on which patients leave slowly make any guess of it too high (tried: half as long again).
 * What they tell is the pace of leaving through the day and how days differ: departures over patient-hours by block, at the
 * level that the stated mean implies by Little's law. Without them the pace is even. Dispositions are not known: every
 * stream of an area has the same hazard, and whoever uses the model must not show admissions of it. Stays are taken as
 * exponential in operational time.
 * @throws RangeError naming an area without a stated mean.
 * Cost: linear in hours times areas.
 */
export function fitHourlyStays(request: HourlyStayRequest): { stay: StayModel; source: StaySource } {
  const { areas, zone, window, stated, capHours, calendar } = request;
  const holidays = calendar.filter((day) => day.kind === 'public holiday').map((day) => day.date);
  const holidaySet = holidayNumbers(holidays);
  const cells = cutBlocks(zone, window.from, window.to, blockHours, holidaySet);
  const runs = countedRuns(request, blockHours, holidaySet);
  const missing = runs.find(({ area, arrivals }) => arrivals > 0 && !stated.has(area));
  if (missing) throw new RangeError(`no mean length of stay is stated for area ${String(missing.area + 1)}`);
  const tallies = emptyTallies(areas, cells);
  const meanOf = (area: number): number => stated.get(area)?.meanHours ?? usualMeanHours;
  const shown = runs.map((area) => (area.refusal === null ? addArea(area, meanOf(area.area), tallies, cells) : null));
  const known = runs.some(({ refusal }) => refusal === null);
  const fitted = known ? fitKnown(tallies, cells, window) : null;
  const streams =
    fitted?.streams ?? fitStreams(tallies, () => new Float64Array(cells.block.length).fill(1), cells.block, blockHours);
  for (const area of runs) {
    const from = area.area * streamsPerArea;
    const own =
      area.refusal === null
        ? asSureAsStated(streams[from])
        : statedStream(streams[from], area.arrivals, meanOf(area.area));
    for (let s = 0; s < streamsPerArea; s += 1) {
      if (s === boardingStream) continue;
      streams[from + s] = { ...own, stream: s, visits: s === 0 ? area.arrivals : 0 };
    }
  }
  const source = runs.some(({ refusal }) => refusal !== null) ? 'stated mean' : 'departures by hour';
  const outflow = fitted?.outflow ?? statedOutflow;
  return {
    source,
    stay: {
      areas,
      capHours,
      blockHours,
      shareBlockHours,
      outflowDayStartsAt: fitted?.dayStartsAt ?? 0,
      holidays,
      usedFrom: window.from,
      usedTo: window.to,
      streams,
      shareBeforeDecision: new Array<null>(areas).fill(null),
      toDecision: new Array<null>(areas).fill(null),
      // One stream takes everybody, so that one outflow factor moves all of them.
      shares: Array.from({ length: areas }, (_, area) => ({
        area,
        alpha: Array.from({ length: 24 / shareBlockHours }, () => [1e6, 1, 1, 1]),
      })),
      outflow: { others: outflow, admitted: outflow },
      bedSpace: new Array<null>(areas).fill(null),
      heaping: {
        arrivalsOnTheHour: 0,
        departuresOnTheHour: 0,
        expectedOnTheHour: 1 / 60,
        departuresAt2359: 0,
        expectedAt2359: 0,
        strongest: [],
      },
      leftOut: {
        endsBeforeStart: 0,
        over30Days: 0,
        outsideWindow: 0,
        inGap: 0,
        departureUnknown: 0,
        dispositionUnknown: 0,
      },
      overCapShare: 0,
      cautions: cautionsOf(runs, meanOf, shown),
    },
  };
}

function emptyTallies(areas: number, cells: BlockCells): StayTallies {
  const streams = areas * streamsPerArea;
  const rows = () => Array.from({ length: streams }, () => new Float64Array(cells.block.length));
  return {
    departures: rows(),
    hoursAtRisk: rows(),
    visits: new Float64Array(streams),
    censored: new Float64Array(streams),
  };
}

/** Adds an area's departures and patient-hours, both as home and as admitted, so that either outflow group is told of them. @returns the mean stay that they amount to, hours */
function addArea(area: AreaRuns, statedMean: number, tallies: StayTallies, cells: BlockCells): number {
  let risk = 0;
  let left = 0;
  for (const run of area.runs) {
    const { patientHours } = patientHoursOf(run, statedMean);
    for (let h = 0; h < patientHours.length; h += 1) {
      const cell = cellAt(cells, run.startAt[h], blockHours);
      // As they were counted; what the balance added to them is taken from the time at risk instead.
      const departures = Math.round(run.departures[h] / area.scale);
      risk += patientHours[h];
      left += run.departures[h];
      for (const stream of [0, admittedStream]) {
        tallies.departures[area.area * streamsPerArea + stream][cell] += departures;
        tallies.hoursAtRisk[area.area * streamsPerArea + stream][cell] += patientHours[h] / area.scale;
      }
    }
  }
  return risk / left;
}

function fitKnown(tallies: StayTallies, cells: BlockCells, window: { from: number; to: number }) {
  const areas = tallies.visits.length / streamsPerArea;
  const fitted = fitOutflowByDay(
    cells,
    window,
    new Array<boolean>(areas).fill(false),
    (factor) => fitStreams(tallies, factor, cells.block, blockHours),
    rounds,
    tallies,
    (streams) =>
      streams.map((stream, index) => {
        const hazards = blockHazards(stream);
        return tallies.hoursAtRisk[index].map((hours, cell) => hours * hazards[cells.block[cell]]);
      }),
  );
  return { streams: fitted.streams, outflow: fitted.others, dayStartsAt: fitted.dayStartsAt };
}

/** The same mean hazard, no surer than the stated mean that its level comes from. */
function asSureAsStated(stream: StayStream): StayStream {
  const { shape, rate } = stream.hazard;
  const held = Math.min(shape, statedStrength);
  const { lower, upper } = fitCensoredExponential(statedStrength, (statedStrength * rate) / shape, 0.95);
  return { ...stream, hazard: { shape: held, rate: (held * rate) / shape }, limits: [lower, upper] };
}

function statedStream(stream: StayStream, arrivals: number, meanHours: number): StayStream {
  const blocks = 2 * (24 / blockHours);
  const { lower, upper } = fitCensoredExponential(statedStrength, statedStrength * meanHours, 0.95);
  return {
    ...stream,
    visits: arrivals,
    departures: 0,
    hoursAtRisk: 0,
    departuresPerHour: 1 / meanHours,
    limits: [lower, upper],
    hazard: { shape: statedStrength, rate: statedStrength * meanHours },
    blockStrength: new Array<number>(blocks).fill(statedBlockStrength),
    blockPrior: new Array<number>(blocks).fill(1),
    blockDepartures: new Array<number>(blocks).fill(0),
    blockHoursAtRisk: new Array<number>(blocks).fill(0),
  };
}

function cautionsOf(
  runs: readonly AreaRuns[],
  meanOf: (area: number) => number,
  shown: readonly (number | null)[],
): string[] {
  return [
    'Fitted on hourly counts: only mean stays are known. Dispositions, admissions, boarding and bed-space times are not, every patient of an area is taken to leave at the same pace, and very long stays are not told apart.',
    ...runs.flatMap(({ area, arrivals, refusal }, index) => {
      if (arrivals === 0) return [];
      const name = `Area ${String(area + 1)}`;
      const mean = meanOf(area);
      const least = shown[index];
      const pace =
        refusal === null
          ? 'The pace of leaving through the day comes from departures by hour.'
          : `Patients are taken to leave at an even pace through the day, and days to differ by 10 % (assumptions, no source): ${refusal}.`;
      return [
        `${name}: a mean stay of ${mean.toFixed(1)} h is stated, not measured; ranges take it as right within 20 % (an assumption, no source). ${pace}`,
        ...(least !== null && least > 1.05 * mean
          ? [
              `${name}: its counts show stays of ${least.toFixed(1)} h at least, longer than stated; that is used instead.`,
            ]
          : []),
      ];
    }),
  ];
}
