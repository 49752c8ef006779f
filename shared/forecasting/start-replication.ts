import { drawPoisson } from '../stochastic/poisson.ts';
import { purposes } from './need-plan.ts';
import { binsPerHour, departureOf, leaveArea, move, stayOf } from './replication-state.ts';
import type { ReplicationState } from './replication-state.ts';
import { admittedStream, boardingStream, streamsPerArea } from './stay-model.ts';

/** Draws who is present in area a at its start and when each of them leaves. */
export function startArea(state: ReplicationState, a: number, replication: number): void {
  const { plan, trace, stream, stays } = state;
  const area = plan.areas[a];
  stream.reseed(plan.seed, purposes.present, replication, a);
  const bins = plan.bins;
  const startBin = area.startHours * binsPerHour;
  const entry = Math.min(bins, Math.floor(startBin));
  for (const { steps, patients, boarding } of area.groups) {
    for (let i = 0; i < patients; i += 1) {
      const u = stream.uniform();
      let inArea = 0;
      while (inArea < boardingStream && u >= steps[inArea]) inArea += 1;
      let at = remainingUntil(state, a, inArea);
      if (boarding) {
        if (state.change.boardersOut !== undefined) at = movedOut(state, a, i, at);
        trace.boarderBin[a][i] = at >= bins ? bins + 1 : Math.floor(at);
      }
      leaveArea(state, a, inArea, at);
    }
    move(state, a, entry, patients);
    trace.patients += patients;
  }
  if (area.startMeans === null) return;
  const expected = area.expectedFirstRate;
  const ratio = expected > 0 ? state.rates[a][area.startSegment] / expected : 1;
  for (let inArea = 0; inArea < boardingStream; inArea += 1) {
    const factor = stays.firstFactor[inArea === admittedStream ? 1 : 0];
    const count = drawPoisson(stream, ratio * interpolate(area.startFactors, area.startMeans[inArea], factor));
    for (let i = 0; i < count; i += 1) {
      leaveArea(state, a, inArea, remainingUntil(state, a, inArea));
    }
    move(state, a, entry, count);
    trace.patients += count;
  }
}

/** Draws until when, in bins, a patient present at the start stays. */
function remainingUntil(state: ReplicationState, a: number, inArea: number): number {
  const s = a * streamsPerArea + inArea;
  const x = stayOf(state.present, s, state.stream.exponential()) * (state.change.stay?.[s] ?? 1);
  return departureOf(state, s, state.plan.areas[a].startSegment, 0, x);
}

/** The end of boarder i's stay where a remedy takes boarders out. */
function movedOut(state: ReplicationState, a: number, i: number, at: number): number {
  const startBin = state.plan.areas[a].startHours * binsPerHour;
  let end = at;
  for (const { area, patients, byHours } of state.change.boardersOut ?? []) {
    // Gone by an hour means not there any more when the hour strikes.
    const by = byHours * binsPerHour;
    if (area === a && i < patients && by <= end) end = Math.max(startBin, by - 1e-8);
  }
  return end;
}

/** Gives the waiting patients whose area is not decided an area, a stream and a whole stay. */
export function startUndecided(state: ReplicationState, replication: number): void {
  const { plan, trace, stream } = state;
  const { undecided } = plan;
  if (undecided === null) return;
  stream.reseed(plan.seed, purposes.undecided, replication, 0);
  const bin = Math.min(plan.bins, Math.floor(undecided.startHours * binsPerHour));
  for (let i = 0; i < undecided.patients; i += 1) {
    const u = stream.uniform();
    let s = 0;
    while (s < undecided.steps.length - 1 && u >= undecided.steps[s]) s += 1;
    const x = stayOf(state.newcomers, s, stream.exponential()) * (state.change.stay?.[s] ?? 1);
    const a = Math.floor(s / streamsPerArea);
    move(state, a, bin, 1);
    leaveArea(state, a, s % streamsPerArea, departureOf(state, s, undecided.startSegment, 0, x));
  }
  trace.patients += undecided.patients;
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
