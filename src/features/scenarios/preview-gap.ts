import type { ScenarioResult } from '../../../shared/api/scenarios.ts';
import type { PlanPreview } from './preview-plan.ts';

/** One full hour of one area with the plan, by both methods. */
interface HourGap {
  areaId: string;
  hour: number;
  preview: number;
  simulated: number;
}

/** How far a preview lies from the confirmed simulation of the same plan where both speak of the same: the chance at each full hour. */
export interface PreviewGap {
  /** Mean absolute difference over all areas and hours. */
  mean: number;
  widest: HourGap;
}

/** The areas of both must be in the same order; null where there is nothing to compare. */
export function previewGap(result: ScenarioResult, preview: PlanPreview): PreviewGap | null {
  const gaps = result.rows.flatMap(({ areaId, hours }, area): HourGap[] =>
    areaId === null
      ? []
      : hours.plan.map((simulated, hour) => ({
          areaId,
          hour,
          simulated,
          preview: preview.areas[area].shortfall[hour],
        })),
  );
  if (gaps.length === 0) return null;
  const width = (gap: HourGap): number => Math.abs(gap.preview - gap.simulated);
  return {
    mean: gaps.reduce((sum, gap) => sum + width(gap), 0) / gaps.length,
    widest: gaps.reduce((widest, gap) => (width(widest) >= width(gap) ? widest : gap)),
  };
}
