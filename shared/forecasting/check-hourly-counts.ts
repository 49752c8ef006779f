import type { HourlyCounts } from './arrival-model.ts';

/**
 * Checks counts before a fit and says how many weeks were observed (exposure / 168).
 * Throws a RangeError naming the first fault: lengths that differ, a start that is not a local midnight, a value that is
 * not a number or negative, arrivals in an hour without exposure, less than two weeks.
 */
export function checkHourlyCounts(counts: HourlyCounts): number {
  const { firstLocalHour, exposureHours, areaExposure } = counts;
  const length = exposureHours.length;
  if (!Number.isInteger(firstLocalHour) || firstLocalHour % 24 !== 0 || length % 24 !== 0) {
    throw new RangeError(`hourly counts must hold whole local days, got ${length} hours from ${firstLocalHour}`);
  }
  if (counts.counts.length === 0) throw new RangeError('hourly counts hold no area');
  if (areaExposure && areaExposure.length !== counts.counts.length) {
    throw new RangeError(`exposure is given for ${areaExposure.length} areas of ${counts.counts.length}`);
  }
  checkSeries('exposureHours', exposureHours, length);
  counts.counts.forEach((arrivals, area) => {
    checkSeries(`counts of area ${area}`, arrivals, length);
    const exposure = areaExposure?.[area] ?? exposureHours;
    if (areaExposure) checkSeries(`exposure of area ${area}`, exposure, length);
    for (let i = 0; i < length; i += 1) {
      if (!Number.isInteger(arrivals[i])) throw new RangeError(`counts of area ${area}: hour ${i} is ${arrivals[i]}`);
      if (arrivals[i] > 0 && !(exposure[i] > 0)) {
        throw new RangeError(`counts of area ${area}: hour ${i} has ${arrivals[i]} arrivals but no exposure`);
      }
    }
  });
  const weeks = exposureHours.reduce((sum, value) => sum + value, 0) / 168;
  // A clock change may take an hour from two whole weeks.
  if (weeks < 2 - 1.5 / 168) {
    throw new RangeError(`at least two weeks of arrivals are needed for a forecast, got ${weeks.toFixed(1)}`);
  }
  return weeks;
}

function checkSeries(name: string, values: Float64Array, length: number): void {
  if (values.length !== length) throw new RangeError(`${name} has ${values.length} hours, not ${length}`);
  for (let i = 0; i < length; i += 1) {
    if (!(values[i] >= 0 && values[i] < Infinity)) throw new RangeError(`${name}: hour ${i} is ${values[i]}`);
  }
}
