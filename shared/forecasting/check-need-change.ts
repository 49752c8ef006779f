import type { NeedChange, NeedPlan } from './need-plan.ts';
import { streamsPerArea } from './stay-model.ts';

function checkFactor(name: string, value: number, most: number): void {
  if (!(value >= 0 && value <= most)) throw new RangeError(`${name} must lie in 0..${most}, got ${value}`);
}

/** Checks a change to be tried. @throws RangeError naming the culprit. */
export function checkNeedChange(plan: NeedPlan, change: NeedChange): void {
  const areas = plan.areas.length;
  const checkArea = (name: string, area: number): void => {
    if (!(Number.isInteger(area) && area >= 0 && area < areas)) throw new RangeError(`${name} is no area: ${area}`);
  };
  const checkSpan = (name: string, fromHours: number, toHours: number): void => {
    if (!(toHours > fromHours)) throw new RangeError(`${name} must end after it starts, got ${fromHours}..${toHours}`);
  };
  if (change.demand !== undefined && change.demand.length !== areas) {
    throw new RangeError(`demand must have one factor an area, got ${change.demand.length}`);
  }
  change.demand?.forEach((factor, a) => checkFactor(`demand[${a}]`, factor, 10));
  if (change.stay !== undefined && change.stay.length !== areas * streamsPerArea) {
    throw new RangeError(`stay must have ${streamsPerArea} factors an area, got ${change.stay.length}`);
  }
  change.stay?.forEach((factor, s) => checkFactor(`stay[${s}]`, factor, 100));
  change.surge?.forEach(({ area, fromHours, toHours, ratePerHour }, i) => {
    checkArea(`surge[${i}].area`, area);
    checkSpan(`surge[${i}]`, fromHours, toHours);
    checkFactor(`surge[${i}].ratePerHour`, ratePerHour, 1000);
  });
  change.boardersOut?.forEach(({ area, patients, byHours }, i) => {
    checkArea(`boardersOut[${i}].area`, area);
    checkFactor(`boardersOut[${i}].patients`, patients, 2000);
    if (!Number.isFinite(byHours)) throw new RangeError(`boardersOut[${i}].byHours must be a time, got ${byHours}`);
  });
  change.closed?.forEach(({ area, fromHours, toHours, to }, i) => {
    checkArea(`closed[${i}].area`, area);
    checkSpan(`closed[${i}]`, fromHours, toHours);
    if (to !== null) checkArea(`closed[${i}].to`, to);
    if (to === area) throw new RangeError(`closed[${i}].to must be another area than the closed one`);
  });
  change.beds?.forEach((beds, a) => {
    if (beds === null) return;
    if (beds.length !== plan.bins) throw new RangeError(`beds[${a}] must have ${plan.bins} bins, got ${beds.length}`);
    const bad = beds.findIndex((value) => !(value >= 0 && value <= 2000));
    if (bad >= 0) throw new RangeError(`beds[${a}][${bad}] must lie in 0..2,000, got ${beds[bad]}`);
  });
}
