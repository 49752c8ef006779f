import { bedsAt, type BedStep } from '../domain/bed-schedule.ts';
import type { Pmf } from '../stochastic/convolve.ts';
import { pmfExceedance } from '../stochastic/pmf.ts';

/** Need against staffed beds over some hours, and who is in charge when. */
export interface SmallestChangeInput {
  /** Full hours, UTC seconds. */
  hours: readonly number[];
  /** Stretches that beds are added to as a whole: each shift while it is in charge. They do not overlap. */
  spans: readonly { from: number; to: number }[];
  areas: readonly {
    /** The law of need at each full hour. */
    laws: readonly Pmf[];
    staffedBeds: readonly BedStep[];
    spaces: number;
    safeMinimum: number;
    bedStep: number;
  }[];
}

/** What is added to one area in one span. */
export interface AddedBeds {
  area: number;
  span: number;
  /** Beds added throughout the span, in whole steps. */
  beds: number;
  bedHours: number;
  /** Highest chance of shortfall at a full hour of the span, as it is and then. */
  before: number;
  after: number;
  /** True: every bed space that exists is staffed then, and the risk asked for is still not met. */
  spacesEnd: boolean;
}

/** An answer: what to add, what it takes and what is left. */
export interface SmallestChange {
  /** Only where beds are added, or where the spaces end. */
  added: AddedBeds[];
  bedHours: number;
  /** Highest chance of shortfall at any full hour, then. */
  worst: number;
  /** The same among the hours that beds can bring lower still. */
  worstThatBedsCanChange: number;
}

/** One area in one span. */
export interface Cell {
  area: number;
  span: number;
  step: number;
  /** Bed-hours of one step. */
  perStep: number;
  /** Highest chance with n steps, falling; the last with every space staffed. */
  risk: number[];
  /** Steps that the safe minimum takes. */
  least: number;
}

/** What the answers are computed from: one cell an area and span. Cost: one sum over a law an hour and step. */
export function changeCells({ hours, spans, areas }: SmallestChangeInput): Cell[] {
  return areas.flatMap((area, a) =>
    spans.flatMap(({ from, to }, span): Cell[] => {
      const within = hours.flatMap((at, h) => (from <= at && at < to ? [h] : []));
      if (within.length === 0) return [];
      const inForce = [
        bedsAt(area.staffedBeds, from),
        ...area.staffedBeds.filter(({ at }) => at > from && at < to).map(({ beds }) => beds),
      ];
      const step = area.bedStep;
      const steps = Math.max(0, Math.floor((area.spaces - Math.max(...inForce)) / step));
      const risk = Array.from({ length: steps + 1 }, (_, n) =>
        within.reduce((worst, h) => {
          const beds = bedsAt(area.staffedBeds, hours[h]) + n * step;
          return Math.max(worst, Math.min(1, pmfExceedance(area.laws[h], beds)));
        }, 0),
      );
      const missing = Math.ceil((area.safeMinimum - Math.min(...inForce)) / step);
      return [
        {
          area: a,
          span,
          step,
          perStep: (step * (to - from)) / 3600,
          risk,
          least: Math.min(steps, Math.max(0, missing)),
        },
      ];
    }),
  );
}

/** Fewest steps that bring a cell to a risk, or as near as its spaces allow. */
function stepsFor({ risk, least }: Cell, wanted: number): number {
  const reachable = Math.max(wanted, risk[risk.length - 1]);
  let n = least;
  while (risk[n] > reachable) n += 1;
  return n;
}

function answer(cells: readonly Cell[], wanted: number): SmallestChange {
  const added: AddedBeds[] = [];
  let worst = 0;
  let changeable = 0;
  let bedHours = 0;
  for (const cell of cells) {
    const n = stepsFor(cell, wanted);
    const { area, span, risk, step, perStep } = cell;
    const after = risk[n];
    const last = risk[risk.length - 1];
    bedHours += n * perStep;
    worst = Math.max(worst, after);
    if (after > last) changeable = Math.max(changeable, after);
    const spacesEnd = last > wanted;
    if (n > 0 || spacesEnd) {
      added.push({ area, span, beds: n * step, bedHours: n * perStep, before: risk[0], after, spacesEnd });
    }
  }
  return { added, bedHours, worst, worstThatBedsCanChange: changeable };
}

/**
 * The fewest bed-hours, by area and span, after which the chance of shortfall is at most `risk` at every full hour: areas and
 * spans do not touch each other, so each takes its own fewest steps. Nothing is taken away; an area that stands below its
 * safe minimum is raised to it. Where the spaces end before the risk is met, all of them are staffed and it is said.
 * @param risk 0..1. @throws RangeError on another.
 */
export function smallestChange(cells: readonly Cell[], risk: number): SmallestChange {
  if (!(risk >= 0 && risk <= 1)) throw new RangeError(`risk must lie in 0..1, got ${risk}`);
  return answer(cells, risk);
}

/**
 * The lowest risk that `bedHours` can buy: the highest chance at any hour that beds can still bring lower is as small as it
 * can be, and no more bed-hours are taken than that needs. Exact: a level's cost only falls as the level rises, so the levels
 * that occur are searched.
 * @returns null where the bed-hours are not even enough for the safe minimums. @throws RangeError on a bad figure.
 */
export function riskLeft(cells: readonly Cell[], bedHours: number): SmallestChange | null {
  if (!(bedHours >= 0 && bedHours < Infinity)) throw new RangeError(`bedHours must be 0 or more, got ${bedHours}`);
  const cost = (level: number): number => cells.reduce((sum, cell) => sum + stepsFor(cell, level) * cell.perStep, 0);
  const affordable = bedHours + 1e-9;
  if (cost(1) > affordable) return null;
  const levels = [...new Set([0, ...cells.flatMap(({ risk }) => risk), 1])].sort((a, b) => a - b);
  let low = 0;
  let high = levels.length - 1;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (cost(levels[middle]) <= affordable) high = middle;
    else low = middle + 1;
  }
  return answer(cells, levels[high]);
}
