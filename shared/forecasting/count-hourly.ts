import { exposureByLocalHour } from '../domain/hour-of-week.ts';
import type { Zone } from '../domain/zoned-time.ts';
import type { HourlyCounts } from './arrival-model.ts';
import type { ExposureGap, VisitTable } from './visit-table.ts';

/**
 * Arrivals and real exposure by local hour within [fromUtc, toUtc), in UTC seconds.
 *
 * Exposure is elapsed time carrying the label: the repeated hour of autumn holds 2 h, the skipped one 0. Gaps (an outage,
 * a diversion) leave the exposure of their area, and arrivals inside them are not counted, so that rate = count / exposure
 * stays right. The result is padded to whole local days with hours of no exposure.
 * Throws a RangeError naming the fault: an empty window, an area outside 0..areas−1, an arrival that is not a number.
 * Cost: linear in visits and hours.
 */
export function countHourly(
  visits: VisitTable,
  areas: number,
  zone: Zone,
  fromUtc: number,
  toUtc: number,
  gaps: readonly ExposureGap[] = [],
): HourlyCounts {
  if (!(Number.isInteger(areas) && areas >= 1))
    throw new RangeError(`areas must be a whole number from 1, got ${areas}`);
  const whole = exposureByLocalHour(zone, fromUtc, toUtc);
  const firstLocalHour = Math.floor(whole.firstLocalHour / 24) * 24;
  const shift = whole.firstLocalHour - firstLocalHour;
  const length = Math.ceil((shift + whole.hours.length) / 24) * 24;
  const exposureHours = new Float64Array(length);
  exposureHours.set(whole.hours, shift);

  for (const gap of gaps) {
    if (!(gap.to > gap.from))
      throw new RangeError(`exposure gap must end after it starts, got ${gap.from} to ${gap.to}`);
    if (gap.area !== null && !(gap.area >= 0 && gap.area < areas))
      throw new RangeError(`exposure gap names area ${gap.area}`);
  }
  const gapsByArea: { from: number; to: number }[][] = [];
  let areaExposure: Float64Array[] | undefined;
  if (gaps.length > 0) {
    areaExposure = [];
    for (let area = 0; area < areas; area += 1) {
      const own = mergeSpans(gaps.filter((gap) => gap.area === null || gap.area === area));
      gapsByArea.push(own);
      const exposure = exposureHours.slice();
      for (const gap of own) {
        const from = Math.max(gap.from, fromUtc);
        const to = Math.min(gap.to, toUtc);
        if (!(to > from)) continue;
        const part = exposureByLocalHour(zone, from, to);
        for (let i = 0; i < part.hours.length; i += 1) {
          const at = part.firstLocalHour + i - firstLocalHour;
          // Below a second is what is left of floating-point subtraction, not exposure.
          const left = exposure[at] - part.hours[i];
          exposure[at] = left < 1 / 3600 ? 0 : left;
        }
      }
      areaExposure.push(exposure);
    }
  }

  const counts = Array.from({ length: areas }, () => new Float64Array(length));
  for (let i = 0; i < visits.length; i += 1) {
    const at = visits.arrivalAt[i];
    if (Number.isNaN(at)) throw new RangeError(`visit ${i} has no arrival time`);
    if (at < fromUtc || at >= toUtc) continue;
    const area = visits.area[i];
    if (area >= areas) throw new RangeError(`visit ${i} names area ${area}, but there are ${areas}`);
    if (gapsByArea[area]?.some((gap) => at >= gap.from && at < gap.to)) continue;
    counts[area][Math.floor(zone.toLocal(at) / 3600) - firstLocalHour] += 1;
  }
  return { firstLocalHour, exposureHours, counts, ...(areaExposure ? { areaExposure } : {}) };
}

/** Overlapping spans as one, so that no time is taken out twice. */
function mergeSpans(spans: readonly { from: number; to: number }[]): { from: number; to: number }[] {
  const merged: { from: number; to: number }[] = [];
  for (const span of [...spans].sort((a, b) => a.from - b.from)) {
    const last = merged.at(-1);
    if (last && span.from <= last.to) last.to = Math.max(last.to, span.to);
    else merged.push({ from: span.from, to: span.to });
  }
  return merged;
}
