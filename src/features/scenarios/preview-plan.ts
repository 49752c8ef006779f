import type { WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { bedsAt } from '../../../shared/domain/bed-schedule.ts';
import {
  bedWindows,
  changedBeds,
  checkPlanChanges,
  type PlanChange,
  type PlanFault,
  type PlanFrame,
} from '../../../shared/domain/plan-change.ts';
import type { Zone } from '../../../shared/domain/zoned-time.ts';
import {
  previewNeed,
  restaffed,
  type ExactOutlook,
  type NeedPreview,
} from '../../../shared/forecasting/preview-need.ts';
import { readExactWire } from '../../../shared/forecasting/read-exact-wire.ts';
import { needChangeOf } from '../../../shared/forecasting/scenario.ts';

/** One area under a plan, by the exact method. */
export interface AreaPreview {
  /** Chance of shortfall at each full hour. */
  shortfall: number[];
  staffed: number[];
  /** The highest of them and its place. */
  worst: number;
  worstAt: number;
  /** Full hours past the area's limit. */
  hoursPast: number;
  /** Bed-hours short over the week, on average: beds short at each full hour added up. */
  bedHoursShort: number;
}

/** A plan by the exact method. */
export interface PlanPreview {
  areas: AreaPreview[];
  bedHoursShort: number;
  milliseconds: number;
}

function areaPreview({ shortfall, staffed, bedsShort }: NeedPreview, alertLimit: number): AreaPreview {
  let worstAt = 0;
  shortfall.forEach((chance, h) => {
    if (chance > shortfall[worstAt]) worstAt = h;
  });
  return {
    shortfall,
    staffed,
    worst: shortfall[worstAt],
    worstAt,
    hoursPast: shortfall.filter((chance) => chance > alertLimit).length,
    bedHoursShort: bedsShort.reduce((sum, beds) => sum + beds, 0),
  };
}

interface Laws {
  need: NeedPreview[];
  areas: AreaPreview[];
}

const keptLaws = 8;

/**
 * Answers plans by the exact method. The laws of need do not depend on the beds, so they are kept for the last few sets of
 * other changes: dragging beds only reads them against another line.
 */
export class PlanPreviewer {
  readonly basis: WhatIfBasis;
  private readonly exact: ExactOutlook;
  private readonly kept = new Map<string, Laws>();

  constructor(basis: WhatIfBasis) {
    this.basis = basis;
    this.exact = readExactWire(basis.exact);
  }

  /** Need by area with everything of a plan but its beds. */
  need(changes: readonly PlanChange[]): readonly NeedPreview[] {
    return this.laws(changes).need;
  }

  /** A plan, and how long its answer took. The changes must be free of faults. */
  preview(changes: readonly PlanChange[]): PlanPreview {
    const startedAt = performance.now();
    const { exact, areas } = this.basis;
    const laws = this.laws(changes);
    const answered = areas.map(({ areaId, alertLimit, staffedBeds }, a) => {
      const windows = bedWindows(changes, areaId);
      // An area whose beds the plan leaves alone keeps its very answer, so that nothing of it is drawn again.
      if (windows.length === 0) return laws.areas[a];
      const changed = changedBeds(staffedBeds, windows);
      const staffed = exact.hours.map((at) => bedsAt(changed, at));
      return areaPreview(restaffed(laws.need[a], staffed), alertLimit);
    });
    return {
      areas: answered,
      bedHoursShort: answered.reduce((sum, area) => sum + area.bedHoursShort, 0),
      milliseconds: performance.now() - startedAt,
    };
  }

  private laws(changes: readonly PlanChange[]): Laws {
    const others = changes.filter(({ kind }) => kind !== 'beds');
    const key = JSON.stringify(others);
    const known = this.kept.get(key);
    if (known) return known;
    const need = previewNeed(this.exact, others.length === 0 ? {} : needChangeOf(others, this.basis.exact));
    const laws = { need, areas: need.map((area, a) => areaPreview(area, this.basis.areas[a].alertLimit)) };
    if (this.kept.size >= keptLaws) this.kept.delete(this.kept.keys().next().value ?? '');
    this.kept.set(key, laws);
    return laws;
  }
}

/** What a plan's changes are checked against. */
export function frameOf(basis: WhatIfBasis): PlanFrame {
  return { from: basis.issuedAt, to: basis.exact.hours[basis.exact.hours.length - 1], areas: basis.areas };
}

/** The faults of a plan's changes, as the server will find them. */
export function planFaults(basis: WhatIfBasis, changes: readonly PlanChange[], zone: Zone): PlanFault[] {
  return checkPlanChanges(changes, frameOf(basis), zone);
}
