import type { NeedPlan } from './need-plan.ts';

/** Stretches of bins between any two ends of hours, shifts and steps of beds: hours and shifts are made of whole pieces. */
export interface NeedPieces {
  /** First bin of every piece and one past the last. */
  cuts: Int32Array;
  count: number;
  /** One past the last piece of every hour, which begins where the hour before ends; first piece and one past the last of every shift; one past the last of the coming night. */
  hourTo: Int32Array;
  shiftFrom: Int32Array;
  shiftTo: Int32Array;
  nightTo: number;
}

/** Cuts a horizon into pieces within which beds do not change. @param beds by bin, per area. */
export function cutPieces(plan: NeedPlan, beds: readonly Int32Array[]): NeedPieces {
  const { hourFrom, hourTo, shiftFrom, shiftTo } = plan;
  const first = hourFrom[0];
  const last = hourTo[hourTo.length - 1];
  const ends = [first, last, plan.nightTo, ...hourFrom, ...hourTo, ...shiftFrom, ...shiftTo];
  for (const own of beds) for (let b = 1; b < own.length; b += 1) if (own[b] !== own[b - 1]) ends.push(b);
  const cuts = [...new Set(ends.map((bin) => Math.min(last, Math.max(first, bin))))].sort((a, b) => a - b);
  const place = (bin: number): number => cuts.findIndex((cut) => cut >= Math.min(last, bin));
  const places = (bins: Int32Array): Int32Array => bins.map(place);
  return {
    cuts: Int32Array.from(cuts),
    count: cuts.length - 1,
    hourTo: places(hourTo),
    shiftFrom: places(shiftFrom),
    shiftTo: places(shiftTo),
    nightTo: place(plan.nightTo),
  };
}
