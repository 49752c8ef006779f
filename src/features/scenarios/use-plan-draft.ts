import { useReducer } from 'react';
import type { PlanChange } from '../../../shared/domain/plan-change.ts';
import type { DraftChange } from './PlanInHand.tsx';

interface Draft {
  name: string;
  changes: DraftChange[];
  next: number;
}

type Act =
  | { do: 'name'; name: string }
  | { do: 'add'; changes: readonly PlanChange[] }
  | { do: 'change'; key: number; change: PlanChange }
  | { do: 'remove'; key: number }
  | { do: 'replace'; changes: readonly PlanChange[] }
  | { do: 'begin'; name: string; changes: readonly PlanChange[] };

function keyed(changes: readonly PlanChange[], first: number): DraftChange[] {
  return changes.map((change, i) => ({ key: first + i, change }));
}

function reduce(draft: Draft, act: Act): Draft {
  switch (act.do) {
    case 'name':
      return { ...draft, name: act.name };
    case 'add':
      return {
        ...draft,
        changes: [...draft.changes, ...keyed(act.changes, draft.next)],
        next: draft.next + act.changes.length,
      };
    case 'change':
      return {
        ...draft,
        changes: draft.changes.map((one) => (one.key === act.key ? { key: act.key, change: act.change } : one)),
      };
    case 'remove':
      return { ...draft, changes: draft.changes.filter(({ key }) => key !== act.key) };
    case 'replace':
      return { ...draft, changes: keyed(act.changes, draft.next), next: draft.next + act.changes.length };
    case 'begin':
      return {
        name: act.name,
        changes: keyed(act.changes, draft.next),
        next: draft.next + act.changes.length,
      };
  }
}

/** The plan that is being put together on the page. */
export function usePlanDraft() {
  return useReducer(reduce, { name: '', changes: [], next: 1 });
}
