import { drawPoisson } from '../stochastic/poisson.ts';
import { purposes } from './need-plan.ts';
import type { StartGroup } from './need-plan.ts';
import { drawPresent, endStays, passIntoBoarding, patientsAtOnce, postLeaving } from './patient-loops.ts';
import { binsPerHour, lastDeparture, leaveArea, move } from './replication-state.ts';
import type { ReplicationState } from './replication-state.ts';
import { admittedStream, streamsPerArea } from './stay-model.ts';

/** Chances of the streams for somebody who is surely in one of them, cumulative. */
const surely = Array.from({ length: streamsPerArea }, (_, only) =>
  Float64Array.from({ length: streamsPerArea }, (_unused, s) => (s >= only ? 1 : 0)),
);

/** Draws who is present in area a at its start and when each of them leaves. */
export function startArea(state: ReplicationState, a: number, replication: number): void {
  const { plan, stream, stays } = state;
  const area = plan.areas[a];
  stream.reseed(plan.seed, purposes.present, replication, a);
  for (const { steps: usual, stepsByFactor, patients, boarding } of area.groups) {
    const steps = stepsByFactor?.[nearest(area.startFactors, stays.firstFactor[1])] ?? usual;
    startGroup(state, a, { patients, steps, boarding });
  }
  if (area.startMeans === null) return;
  const expected = area.expectedFirstRate;
  const ratio = expected > 0 ? state.rates[a][area.startSegment] / expected : 1;
  for (let inArea = 0; inArea < streamsPerArea; inArea += 1) {
    const factor = stays.firstFactor[area.outflowPlaces[inArea]];
    const patients = drawPoisson(stream, ratio * interpolate(area.startFactors, area.startMeans[inArea], factor));
    startGroup(state, a, { patients, steps: surely[inArea], boarding: false });
  }
}

function startGroup(state: ReplicationState, a: number, group: StartGroup): void {
  const { plan, trace, stream, sizes, batch } = state;
  const { bins } = plan;
  const { startHours, startSegment, staged } = plan.areas[a];
  const { patients, steps, boarding } = group;
  const firstStream = a * streamsPerArea;
  const firstLaw = plan.areas.length * streamsPerArea + firstStream;
  for (let drawn = 0; drawn < patients; drawn += patientsAtOnce) {
    const count = Math.min(patientsAtOnce, patients - drawn);
    drawPresent(stream, count, steps, startSegment, state.stages);
    endStays(count, firstStream, firstLaw, plan.segments + 2);
    if (staged && !boarding) endStays(passIntoBoarding(count, bins), firstStream, firstStream, plan.segments + 2);
    if (boarding) {
      for (let i = 0; i < count; i += 1) {
        if (state.change.boardersOut !== undefined) batch.until[i] = movedOut(state, a, drawn + i, batch.until[i]);
        const at = batch.until[i];
        trace.boarderBin[a][drawn + i] = at >= bins ? bins + 1 : Math.floor(at);
      }
    }
    postLeaving(count, a, sizes);
  }
  move(state, a, Math.min(bins, Math.floor(startHours * binsPerHour)), patients);
  trace.patients += patients;
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
    const a = Math.floor(s / streamsPerArea);
    const inArea = s % streamsPerArea;
    const stay = stream.exponential();
    const boards = state.stages && inArea === admittedStream ? stream.exponential() : 0;
    move(state, a, bin, 1);
    leaveArea(state, a, inArea, lastDeparture(state, a, inArea, undecided.startSegment, 0, stay, boards));
  }
  trace.patients += undecided.patients;
}

/** Place of the tabulated point nearest to x. */
function nearest(at: Float64Array, x: number): number {
  let i = 0;
  while (i < at.length - 1 && at[i] + at[i + 1] < 2 * x) i += 1;
  return i;
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
