import { drawPoisson } from '../stochastic/poisson.ts';
import { makeStream } from '../stochastic/random.ts';
import { makeNeedPart } from './need-part.ts';
import type { NeedPart } from './need-part.ts';
import { binSeconds, purposes } from './need-plan.ts';
import type { AreaPlan, NeedChange, NeedPlan } from './need-plan.ts';
import { QuickStream } from './quick-stream.ts';
import { makeNeedRecorder } from './record-need.ts';
import type { ReplicationTrace } from './record-need.ts';
import { admittedStream, boardingStream, streamsPerArea } from './stay-model.ts';
import { stayAt } from './stay-shape.ts';

const binsPerHour = 3600 / binSeconds;

/**
 * Simulates need, replications [from, to): jointly over areas, each with its own draw of rates, hazards, shares and
 * outflow, of who is present (census → streams), of arrivals (piecewise inversion: unit-exponential gaps on the cumulative
 * rate) and of stays, drawn with the arrival as a cumulative hazard and ended when ∫ μ·g·f reaches it (time change).
 * Streams of randomness are made of (seed, purpose, replication, area), so that any split of the replications gives the
 * same digits, and changes tried keep every other draw. Times are continuous; need is read at the end of bins of 300 s.
 * @returns counts for `mergeNeedParts` and `finishOutlook`. Cost: about 80 ns a patient, plus a few µs a replication.
 */
export function simulateNeedPart(plan: NeedPlan, from: number, to: number, change?: NeedChange): NeedPart {
  if (!(Number.isInteger(from) && Number.isInteger(to) && from >= 0 && to > from)) {
    throw new RangeError(`replications must be whole and ascending, got ${from}..${to}`);
  }
  const part = makeNeedPart(plan, from, to);
  const replicate = makeReplication(plan, change);
  const record = makeNeedRecorder(plan, part, change);
  for (let replication = from; replication < to; replication += 1) {
    const trace = replicate(replication);
    part.patients += trace.patients;
    record(trace, replication - from);
  }
  return part;
}

/** Makes the function that runs one replication; its buffers are reused, so read a trace before the next. */
export function makeReplication(plan: NeedPlan, change?: NeedChange): (replication: number) => ReplicationTrace {
  const { segments, segmentAt, areas, bins, seed, hourOfBin } = plan;
  const rates = areas.map(() => new Float64Array(segments));
  const streams = areas.length * streamsPerArea;
  const stays = {
    hazard: new Float64Array(streams * segments),
    shareSteps: new Float64Array(areas.length * plan.shareBlocks * 3),
    firstFactor: [1, 1] as [number, number],
  };
  // ∫ hazard from the start to each segment, [stream · (segments + 1) + segment].
  const spent = new Float64Array(streams * (segments + 1));
  const trace: ReplicationTrace = {
    patients: 0,
    moves: areas.map(() => new Int32Array(bins + 1)),
    admittedOut: areas.map(() => new Int32Array(plan.hourTo.length + 1)),
    admittedIn: areas.map(() => new Int32Array(plan.hourTo.length + 1)),
    boarderBin: areas.map((area) => new Int32Array(area.boarders)),
  };
  const stream = new QuickStream();
  const other = new QuickStream();
  const joint = makeStream(seed);
  const path = makeStream(seed);
  const width = segments + 1;
  const end = segmentAt[segments];
  const thin = change?.demand;
  const scale = change?.stay;

  /** When a stay of cumulative hazard x, begun in segment k at time t, ends: hours since the start, Infinity past the end. */
  function departure(s: number, k: number, t: number, x: number): number {
    const base = s * width;
    const hazardBase = s * segments;
    const target = spent[base + k] + stays.hazard[hazardBase + k] * (t - segmentAt[k]) + x;
    if (!(target < spent[base + segments])) return Infinity;
    let at = k;
    while (spent[base + at + 1] <= target) at += 1;
    return segmentAt[at] + (target - spent[base + at]) / stays.hazard[hazardBase + at];
  }

  function leave(a: number, inArea: number, at: number): void {
    if (at >= end) return;
    const bin = Math.min(bins, Math.floor(at * binsPerHour));
    trace.moves[a][bin] -= 1;
    if (inArea === admittedStream || inArea === boardingStream) trace.admittedOut[a][hourOfBin[bin]] += 1;
  }

  /** Places a patient who is present at the start of area a, in its stream `inArea`, and returns when they leave. */
  function present(a: number, area: AreaPlan, inArea: number, k: number, t: number, draw: number): number {
    const s = a * streamsPerArea + inArea;
    const shape = area.remaining[inArea];
    let x = shape === null ? draw : stayAt(shape, draw);
    if (scale !== undefined) x *= scale[s];
    return departure(s, k, t, x);
  }

  function startArea(a: number, replication: number): void {
    const area = areas[a];
    stream.reseed(seed, purposes.present, replication, a);
    const firstBin = Math.min(bins, Math.floor(area.startHours * binsPerHour));
    const moves = trace.moves[a];
    for (const group of area.groups) {
      const { steps } = group;
      for (let i = 0; i < group.patients; i += 1) {
        const u = stream.uniform();
        let inArea = 0;
        while (inArea < boardingStream && u >= steps[inArea]) inArea += 1;
        let at = present(a, area, inArea, area.startSegment, area.startHours, stream.exponential());
        if (group.boarding) {
          const out = change?.boardersOut?.find((one) => one.area === a && i < one.patients);
          if (out !== undefined && out.byHours < at) at = Math.max(area.startHours, out.byHours - 1e-9);
          trace.boarderBin[a][i] = at >= end ? bins + 1 : Math.floor(at * binsPerHour);
        }
        leave(a, inArea, at);
      }
      moves[firstBin] += group.patients;
      trace.patients += group.patients;
    }
    if (area.startMeans === null) return;
    const ratio = area.expectedFirstRate > 0 ? rates[a][area.startSegment] / area.expectedFirstRate : 1;
    for (let inArea = 0; inArea < boardingStream; inArea += 1) {
      const factor = stays.firstFactor[inArea === admittedStream ? 1 : 0];
      const mean = ratio * interpolate(area.startFactors, area.startMeans[inArea], factor);
      const count = drawPoisson(stream, mean);
      for (let i = 0; i < count; i += 1) {
        leave(a, inArea, present(a, area, inArea, area.startSegment, area.startHours, stream.exponential()));
      }
      moves[firstBin] += count;
      trace.patients += count;
    }
  }

  /** Arrivals of one area at `rate` within [fromSegment, end), from a stream set beforehand. */
  function arrive(a: number, rate: Float64Array, k0: number, t0: number, keep: number, replication: number): void {
    const area = areas[a];
    const moves = trace.moves[a];
    const admittedIn = trace.admittedIn[a];
    const admittedOut = trace.admittedOut[a];
    // Local names: the loop below is where the time goes, and captured ones cost a look-up each.
    const { hazard, shareSteps } = stays;
    const { shapes } = area;
    const { segmentAt, shareBlock, segments, hourOfBin } = plan;
    const source = stream;
    const cumulated = spent;
    const row = segments + 1;
    const firstStream = a * streamsPerArea;
    const shareFrom = a * plan.shareBlocks * 3;
    const thinned = keep < 1;
    if (thinned) other.reseed(seed, purposes.thinning, replication, a);
    let k = k0;
    let t = t0;
    let count = 0;
    for (;;) {
      let gap = source.exponential();
      let room = rate[k] * (segmentAt[k + 1] - t);
      while (gap >= room) {
        gap -= room;
        k += 1;
        if (k === segments) {
          trace.patients += count;
          return;
        }
        t = segmentAt[k];
        room = rate[k] * (segmentAt[k + 1] - t);
      }
      t += gap / rate[k];
      const u = source.uniform();
      const share = shareFrom + shareBlock[k] * 3;
      const inArea = u < shareSteps[share] ? 0 : u < shareSteps[share + 1] ? 1 : u < shareSteps[share + 2] ? 2 : 3;
      const draw = source.exponential();
      if (thinned && other.uniform() >= keep) continue;
      count += 1;
      const shape = shapes[inArea];
      let x = shape === null ? draw : stayAt(shape, draw);
      const s = firstStream + inArea;
      if (scale !== undefined) x *= scale[s];
      const bin = Math.floor(t * binsPerHour);
      moves[bin] += 1;
      if (inArea === admittedStream) admittedIn[hourOfBin[bin]] += 1;
      // As in `departure`, written out.
      const base = s * row;
      const target = cumulated[base + k] + hazard[s * segments + k] * (t - segmentAt[k]) + x;
      if (target < cumulated[base + segments]) {
        let at = k;
        while (cumulated[base + at + 1] <= target) at += 1;
        const out = Math.floor(
          (segmentAt[at] + (target - cumulated[base + at]) / hazard[s * segments + at]) * binsPerHour,
        );
        moves[out] -= 1;
        if (inArea === admittedStream) admittedOut[hourOfBin[out]] += 1;
      }
    }
  }

  const changedRate = new Float64Array(segments);
  return (replication) => {
    trace.patients = 0;
    for (let a = 0; a < areas.length; a += 1) {
      trace.moves[a].fill(0);
      trace.admittedOut[a].fill(0);
      trace.admittedIn[a].fill(0);
    }
    joint.reseed(seed, purposes.rates, replication);
    plan.drawRates(joint, rates);
    joint.reseed(seed, purposes.parameters, replication);
    path.reseed(seed, purposes.outflow, replication);
    plan.drawStays(joint, path, stays);
    for (let s = 0; s < streams; s += 1) {
      const base = s * width;
      const from = s * segments;
      let sum = 0;
      for (let k = 0; k < segments; k += 1) {
        sum += stays.hazard[from + k] * (segmentAt[k + 1] - segmentAt[k]);
        spent[base + k + 1] = sum;
      }
    }
    for (let a = 0; a < areas.length; a += 1) startArea(a, replication);
    if (plan.undecided !== null) startUndecided(replication);
    for (let a = 0; a < areas.length; a += 1) {
      const area = areas[a];
      const demand = thin?.[a] ?? 1;
      stream.reseed(seed, purposes.arrivals, replication, a);
      arrive(a, rates[a], area.startSegment, area.startHours, Math.min(1, demand), replication);
      if (demand > 1) {
        stream.reseed(seed, purposes.extra, replication, a);
        for (let k = 0; k < segments; k += 1) changedRate[k] = rates[a][k] * (demand - 1);
        arrive(a, changedRate, area.startSegment, area.startHours, 1, replication);
      }
    }
    return trace;
  };

  function startUndecided(replication: number): void {
    const undecided = plan.undecided;
    if (undecided === null) return;
    stream.reseed(seed, purposes.undecided, replication, 0);
    const firstBin = Math.min(bins, Math.floor(undecided.startHours * binsPerHour));
    for (let i = 0; i < undecided.patients; i += 1) {
      const u = stream.uniform();
      let place = 0;
      while (place < undecided.steps.length - 1 && u >= undecided.steps[place]) place += 1;
      const a = Math.floor(place / streamsPerArea);
      const inArea = place % streamsPerArea;
      const draw = stream.exponential();
      // Still waiting for an area, hence newly come: the whole stay lies ahead.
      const shape = areas[a].shapes[inArea];
      const x = (shape === null ? draw : stayAt(shape, draw)) * (scale?.[place] ?? 1);
      trace.moves[a][firstBin] += 1;
      leave(a, inArea, departure(place, undecided.startSegment, undecided.startHours, x));
      trace.patients += 1;
    }
  }
}

/** Linear between tabulated points, flat beyond them. */
function interpolate(at: Float64Array, values: Float64Array, x: number): number {
  const last = at.length - 1;
  if (x <= at[0]) return values[0];
  if (x >= at[last]) return values[last];
  let i = 0;
  while (at[i + 1] < x) i += 1;
  return values[i] + ((x - at[i]) / (at[i + 1] - at[i])) * (values[i + 1] - values[i]);
}
