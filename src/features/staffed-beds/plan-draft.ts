import { halfHoursOfWeek } from '../../../shared/domain/bed-schedule.ts';

/** Staffed beds by half hour of week, by area id; null where no figure stands. */
export type Planned = Readonly<Record<string, readonly (number | null)[]>>;

/** A plan while it is edited: the version it started from, what stands now, and the steps back and forth. */
export interface PlanDraft {
  /** Of the plan that `base` is; 0 where there was none. */
  version: number;
  base: Planned;
  now: Planned;
  past: readonly Planned[];
  future: readonly Planned[];
}

/** One edit: figures for half hours of an area. */
export interface PlanEdit {
  areaId: string;
  halfHours: readonly number[];
  beds: number | null;
}

export type DraftAction =
  | { type: 'edit'; edits: readonly PlanEdit[] }
  | { type: 'undo' }
  | { type: 'redo' }
  | { type: 'discard' }
  /** The plan in force changed: start from it, with one's own changes laid over it if wanted. */
  | { type: 'rebase'; version: number; base: Planned; keepChanges: boolean };

interface PlanInForce {
  version: number;
  areas: readonly { areaId: string; halfHours: readonly number[] }[];
}

const stepsKept = 200;

/** The plan in force with every area of the site; an area that it does not name is one hole. */
export function plannedOf(areaIds: readonly string[], plan: PlanInForce | null): Planned {
  const empty = new Array<null>(halfHoursOfWeek).fill(null);
  return Object.fromEntries(
    areaIds.map((id) => [id, plan?.areas.find(({ areaId }) => areaId === id)?.halfHours ?? empty]),
  );
}

export function startDraft(areaIds: readonly string[], plan: PlanInForce | null): PlanDraft {
  const base = plannedOf(areaIds, plan);
  return { version: plan?.version ?? 0, base, now: base, past: [], future: [] };
}

/** What follows from an action; an edit that changes nothing adds no step. */
export function changeDraft(draft: PlanDraft, action: DraftAction): PlanDraft {
  const { now, past, future } = draft;
  switch (action.type) {
    case 'edit': {
      const next = withEdits(now, action.edits);
      return next === now ? draft : { ...draft, now: next, past: [...past, now].slice(-stepsKept), future: [] };
    }
    case 'undo': {
      const before = past.at(-1);
      return before ? { ...draft, now: before, past: past.slice(0, -1), future: [now, ...future] } : draft;
    }
    case 'redo': {
      const after = future.at(0);
      return after ? { ...draft, now: after, past: [...past, now], future: future.slice(1) } : draft;
    }
    case 'discard':
      return isChanged(draft) ? { ...draft, now: draft.base, past: [...past, now], future: [] } : draft;
    case 'rebase': {
      const { version, base, keepChanges } = action;
      return { version, base, now: keepChanges ? layOver(draft, base) : base, past: [], future: [] };
    }
  }
}

/** Whether anything differs from the plan that it started from. */
export function isChanged({ base, now }: Pick<PlanDraft, 'base' | 'now'>): boolean {
  return Object.entries(now).some(([areaId, halfHours]) =>
    halfHours.some((beds, halfHour) => beds !== base[areaId][halfHour]),
  );
}

function withEdits(now: Planned, edits: readonly PlanEdit[]): Planned {
  const changed: Record<string, (number | null)[]> = {};
  for (const { areaId, halfHours, beds } of edits) {
    for (const halfHour of halfHours) {
      if ((changed[areaId] ?? now[areaId])[halfHour] === beds) continue;
      changed[areaId] ??= [...now[areaId]];
      changed[areaId][halfHour] = beds;
    }
  }
  return Object.keys(changed).length > 0 ? { ...now, ...changed } : now;
}

function layOver(draft: PlanDraft, base: Planned): Planned {
  return Object.fromEntries(
    Object.entries(base).map(([areaId, halfHours]) => [
      areaId,
      halfHours.map((beds, halfHour) => {
        const mine = draft.now[areaId]?.[halfHour];
        return mine === undefined || mine === draft.base[areaId]?.[halfHour] ? beds : mine;
      }),
    ]),
  );
}
