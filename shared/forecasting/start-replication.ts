import { drawPoisson } from '../stochastic/poisson.ts';
import { purposes } from './need-plan.ts';
import { binsPerHour, departureOf, leaveArea } from './replication-state.ts';
import type { ReplicationState } from './replication-state.ts';
import { admittedStream, boardingStream, streamsPerArea } from './stay-model.ts';
import { stayAt } from './stay-shape.ts';

/** Draws who is present in area a at its start and when each of them leaves. */
export function startArea(state: ReplicationState, a: number, replication: number): void {
  const { plan, trace, stream, stays } = state;
  const area = plan.areas[a];
  const { startSegment, startHours } = area;
  const end = plan.segmentAt[plan.segments];
  const scale = state.change.stay;
  const out = state.change.boardersOut?.filter((one) => one.area === a) ?? [];
  stream.reseed(plan.seed, purposes.present, replication, a);
  const firstBin = Math.min(plan.bins, Math.floor(startHours * binsPerHour));

  function departure(inArea: number): number {
    const s = a * streamsPerArea + inArea;
    const shape = area.remaining[inArea];
    const draw = stream.exponential();
    const x = (shape === null ? draw : stayAt(shape, draw)) * (scale?.[s] ?? 1);
    return departureOf(state, s, startSegment, startHours, x);
  }

  for (const group of area.groups) {
    const { steps } = group;
    for (let i = 0; i < group.patients; i += 1) {
      const u = stream.uniform();
      let inArea = 0;
      while (inArea < boardingStream && u >= steps[inArea]) inArea += 1;
      let at = departure(inArea);
      if (group.boarding) {
        // Gone by an hour means not there any more when the hour strikes.
        for (const { patients, byHours } of out) {
          if (i < patients && byHours <= at) at = Math.max(startHours, byHours - 1e-9);
        }
        trace.boarderBin[a][i] = at >= end ? plan.bins + 1 : Math.floor(at * binsPerHour);
      }
      leaveArea(state, a, inArea, at);
    }
    trace.moves[a][firstBin] += group.patients;
    trace.patients += group.patients;
  }
  if (area.startMeans === null) return;
  const expected = area.expectedFirstRate;
  const ratio = expected > 0 ? state.rates[a][startSegment] / expected : 1;
  for (let inArea = 0; inArea < boardingStream; inArea += 1) {
    const factor = stays.firstFactor[inArea === admittedStream ? 1 : 0];
    const count = drawPoisson(stream, ratio * interpolate(area.startFactors, area.startMeans[inArea], factor));
    for (let i = 0; i < count; i += 1) leaveArea(state, a, inArea, departure(inArea));
    trace.moves[a][firstBin] += count;
    trace.patients += count;
  }
}

/** Gives the waiting patients whose area is not decided an area, a stream and a whole stay. */
export function startUndecided(state: ReplicationState, replication: number): void {
  const { plan, trace, stream } = state;
  const { undecided } = plan;
  if (undecided === null) return;
  stream.reseed(plan.seed, purposes.undecided, replication, 0);
  const firstBin = Math.min(plan.bins, Math.floor(undecided.startHours * binsPerHour));
  for (let i = 0; i < undecided.patients; i += 1) {
    const u = stream.uniform();
    let place = 0;
    while (place < undecided.steps.length - 1 && u >= undecided.steps[place]) place += 1;
    const a = Math.floor(place / streamsPerArea);
    const inArea = place % streamsPerArea;
    const draw = stream.exponential();
    const shape = plan.areas[a].shapes[inArea];
    const x = (shape === null ? draw : stayAt(shape, draw)) * (state.change.stay?.[place] ?? 1);
    trace.moves[a][firstBin] += 1;
    trace.patients += 1;
    leaveArea(state, a, inArea, departureOf(state, place, undecided.startSegment, undecided.startHours, x));
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
