import { bedsAt, type BedStep } from './bed-schedule.ts';
import { localParts, type Zone } from './zoned-time.ts';

/** One change that a plan tries. Instants are UTC seconds; percentages are added to 100. */
export type PlanChange =
  | { kind: 'demand'; areaId: string | null; percent: number }
  | { kind: 'stay'; areaId: string | null; who: 'everyone' | 'admitted'; percent: number }
  | { kind: 'beds'; areaId: string; from: number; to: number; beds: number }
  | { kind: 'boarding out'; areaId: string; patients: number; by: number }
  | { kind: 'surge'; areaId: string; from: number; to: number; patients: number }
  | { kind: 'closed'; areaId: string; from: number; to: number; toAreaId: string | null };

export type PlanChangeKind = PlanChange['kind'];

/** An area as a plan's changes are checked against it. */
export interface PlanFrameArea {
  areaId: string;
  name: string;
  /** Bed spaces that exist. */
  spaces: number;
  /** Boarding patients counted; null without a census. */
  boarding: number | null;
  /** Staffed beds as they stand, the first step at or before the start. */
  staffedBeds: readonly BedStep[];
}

/** What a plan's changes are checked against. */
export interface PlanFrame {
  /** UTC seconds; the last is the last hour that is looked at. */
  from: number;
  to: number;
  areas: readonly PlanFrameArea[];
}

/** A fault of one change: the field, as `changes.2.beds`, and what to do. */
export interface PlanFault {
  at: string;
  message: string;
}

const days = ['Mon', 'Tue', 'Wed', 'Thu', 'Fri', 'Sat', 'Sun'];
const two = (value: number): string => String(value).padStart(2, '0');

/** "Tue 21:00", the site's time. */
export function dayAndTime(zone: Zone, at: number): string {
  const { weekday, hour, minute } = localParts(zone.toLocal(at));
  return `${days[weekday - 1]} ${two(hour)}:${two(minute)}`;
}

type BedWindow = Pick<Extract<PlanChange, { kind: 'beds' }>, 'from' | 'to' | 'beds'>;

/** Staffed beds with windows of more or fewer laid over them; windows that overlap add up. */
export function changedBeds(steps: readonly BedStep[], windows: readonly BedWindow[]): BedStep[] {
  const first = steps[0].at;
  const cuts = new Set(steps.map((step) => step.at));
  for (const { from, to } of windows) {
    if (from > first) cuts.add(from);
    if (to > first) cuts.add(to);
  }
  const changed: BedStep[] = [];
  for (const at of [...cuts].sort((a, b) => a - b)) {
    const more = windows.reduce((sum, one) => (one.from <= at && at < one.to ? sum + one.beds : sum), 0);
    const beds = bedsAt(steps, at) + more;
    if (changed.length === 0 || changed[changed.length - 1].beds !== beds) changed.push({ at, beds });
  }
  return changed;
}

/** The windows of beds that a plan has for an area. */
export function bedWindows(changes: readonly PlanChange[], areaId: string): BedWindow[] {
  return changes.flatMap((change) => (change.kind === 'beds' && change.areaId === areaId ? [change] : []));
}

interface Window {
  from: number;
  to: number;
}

const overlap = (a: Window, b: Window): boolean => a.from < b.to && b.from < a.to;

/**
 * Every fault of a plan's changes at once, each with the field that must be mended: an area that is not the site's, a
 * window that is empty, off the half hours or outside the hours looked at, beds below none or beyond the bed spaces that
 * exist, more boarding patients than were counted, a surge on a closed area, an area that closes twice or sends its
 * arrivals to itself or to a closed one. Safe minimums are held where a plan is adopted: below them may be tried, never staffed.
 */
export function checkPlanChanges(changes: readonly PlanChange[], frame: PlanFrame, zone: Zone): PlanFault[] {
  const faults: PlanFault[] = [];
  const areas = new Map(frame.areas.map((area) => [area.areaId, area]));
  const say = (i: number, field: string, message: string): void => {
    faults.push({ at: `changes.${String(i)}.${field}`, message });
  };
  const closed = changes.flatMap((change, i) => (change.kind === 'closed' ? [{ ...change, i }] : []));
  const outside = `The hours looked at are ${dayAndTime(zone, frame.from)} to ${dayAndTime(zone, frame.to)}, seven days on.`;
  const checkInstant = (i: number, field: string, at: number): boolean => {
    if (at < frame.from - 1800 || at > frame.to) say(i, field, outside);
    else if (zone.toLocal(at) % 1800 !== 0) say(i, field, 'Choose a full or a half hour.');
    else return true;
    return false;
  };
  const checkWindow = (i: number, { from, to }: Window): boolean => {
    const fine = [checkInstant(i, 'from', from), checkInstant(i, 'to', to)].every(Boolean);
    if (fine && !(to > from)) say(i, 'to', 'It must end after it starts.');
    return fine && to > from;
  };
  changes.forEach((change, i) => {
    const area = change.areaId === null ? null : areas.get(change.areaId);
    if (area === undefined) {
      say(i, 'areaId', 'This care area is not one that the model in use can forecast.');
      return;
    }
    if ('from' in change && !checkWindow(i, change)) return;
    if (change.kind === 'beds' && area) {
      const changed = changedBeds(area.staffedBeds, bedWindows(changes, area.areaId));
      const worst = extremeBeds(changed, change);
      if (worst.most.beds > area.spaces) {
        const when = dayAndTime(zone, Math.max(worst.most.at, change.from));
        say(
          i,
          'beds',
          `${area.name} would have ${String(worst.most.beds)} staffed beds on ${when}: ${String(area.spaces)} bed spaces exist.`,
        );
      }
      if (worst.fewest.beds < 0) {
        const when = dayAndTime(zone, Math.max(worst.fewest.at, change.from));
        const there = bedsAt(area.staffedBeds, Math.max(worst.fewest.at, change.from));
        say(i, 'beds', `${area.name} has ${String(there)} staffed beds on ${when}: no more can be taken away.`);
      }
    }
    if (change.kind === 'boarding out' && area) {
      checkInstant(i, 'by', change.by);
      const asked = changes.reduce(
        (sum, other) => (other.kind === 'boarding out' && other.areaId === area.areaId ? sum + other.patients : sum),
        0,
      );
      if (area.boarding === null) say(i, 'areaId', `${area.name} has no census: nobody is counted as boarding.`);
      else if (asked > area.boarding) {
        say(i, 'patients', `${String(area.boarding)} boarding patients are counted in ${area.name}.`);
      }
    }
    if (change.kind === 'surge' && area) {
      if (closed.some((shut) => shut.areaId === area.areaId && overlap(shut, change))) {
        say(i, 'areaId', `${area.name} is closed in that time: put the surge where its arrivals go.`);
      }
    }
    if (change.kind === 'closed' && area) {
      if (closed.some((other) => other.i < i && other.areaId === area.areaId && overlap(other, change))) {
        say(i, 'from', `${area.name} is closed already in that time.`);
      }
      const { toAreaId } = change;
      if (toAreaId === area.areaId) say(i, 'toAreaId', 'Its arrivals must go to another area.');
      else if (toAreaId !== null && !areas.has(toAreaId)) {
        say(i, 'toAreaId', 'This care area is not one that the model in use can forecast.');
      } else if (closed.some((other) => other.areaId === toAreaId && overlap(other, change))) {
        say(i, 'toAreaId', `${areas.get(toAreaId ?? '')?.name ?? ''} is closed in that time too.`);
      }
    }
  });
  return faults;
}

/** The most and the fewest beds of steps within a window. */
function extremeBeds(steps: readonly BedStep[], { from, to }: Window): { most: BedStep; fewest: BedStep } {
  const within = steps.filter((step, i) => step.at < to && (steps[i + 1]?.at ?? Infinity) > from);
  return {
    most: within.reduce((a, b) => (b.beds > a.beds ? b : a)),
    fewest: within.reduce((a, b) => (b.beds < a.beds ? b : a)),
  };
}
