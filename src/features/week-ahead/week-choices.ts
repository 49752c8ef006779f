import { useSearchParams } from 'react-router-dom';

export const leastDays = 7;
export const mostDays = 14;
export const gapOrders = ['worst', 'booking'] as const;
export type GapOrder = (typeof gapOrders)[number];

/** What the address says is looked at: how many days, the order of the gaps, and whose heat map. */
export interface WeekChoices {
  days: number;
  order: GapOrder;
  /** Null: the whole department. */
  mapAreaId: string | null;
}

/** Reads the choices from the address; whatever is not one counts as the usual. */
export function readChoices(search: URLSearchParams): WeekChoices {
  const days = Number(search.get('days') ?? leastDays);
  const order = gapOrders.find((known) => known === search.get('order'));
  return {
    days: Number.isInteger(days) && days >= leastDays && days <= mostDays ? days : leastDays,
    order: order ?? 'worst',
    mapAreaId: search.get('area'),
  };
}

/** The choices with how to change one; the address keeps them, so that a link shows the same. */
export function useWeekChoices(): [WeekChoices, (change: Partial<WeekChoices>) => void] {
  const [search, setSearch] = useSearchParams();
  const choices = readChoices(search);
  function change(part: Partial<WeekChoices>) {
    const next = { ...choices, ...part };
    setSearch(
      {
        ...(next.days === leastDays ? {} : { days: String(next.days) }),
        ...(next.order === 'worst' ? {} : { order: next.order }),
        ...(next.mapAreaId === null ? {} : { area: next.mapAreaId }),
      },
      { replace: true, preventScrollReset: true },
    );
  }
  return [choices, change];
}
