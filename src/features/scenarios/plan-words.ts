import type { WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { dayAndTime, type PlanChange, type PlanChangeKind } from '../../../shared/domain/plan-change.ts';
import { formatCount, zoneOf } from '../../lib/format.ts';

/** What each kind of change is called where one is added. */
export const changeNames: Record<PlanChangeKind, string> = {
  beds: 'Staffed beds, more or fewer',
  'boarding out': 'Boarding patients out by an hour',
  demand: 'Arrivals, more or fewer',
  stay: 'Length of stay, longer or shorter',
  surge: 'A surge of arrivals',
  closed: 'An area closed',
};

/** "bed" or "chair". */
export function unitOf(area: WhatIfBasis['areas'][number] | undefined): string {
  return area?.spaceKind === 'chair' ? 'chair' : 'bed';
}

const moreOrLess = (percent: number, more: string, less: string): string =>
  percent === 0 ? 'unchanged' : `${String(Math.abs(percent))}\u00a0% ${percent > 0 ? more : less}`;

/** A change in words: "Acute: 3 beds more, Mon 21:00 to Tue 07:00". */
export function changeInWords(change: PlanChange, areas: WhatIfBasis['areas'], timeZone: string): string {
  const zone = zoneOf(timeZone);
  const area = areas.find(({ areaId }) => areaId === change.areaId);
  const name = change.areaId === null ? 'Every area' : (area?.name ?? 'An area that is not forecast');
  const span = 'from' in change ? `${dayAndTime(zone, change.from)} to ${dayAndTime(zone, change.to)}` : '';
  switch (change.kind) {
    case 'demand':
      return `${name}: arrivals ${moreOrLess(change.percent, 'more', 'fewer')}`;
    case 'stay':
      return `${name}: stays of ${change.who === 'admitted' ? 'admitted patients' : 'everyone'} ${moreOrLess(change.percent, 'longer', 'shorter')}`;
    case 'beds':
      return `${name}: ${formatCount(Math.abs(change.beds), unitOf(area))} ${change.beds < 0 ? 'fewer' : 'more'}, ${span}`;
    case 'boarding out':
      return `${name}: ${formatCount(change.patients, 'boarding patient')} out by ${dayAndTime(zone, change.by)}`;
    case 'surge':
      return `${name}: ${formatCount(change.patients, 'extra arrival')}, ${span}`;
    case 'closed': {
      const to = areas.find(({ areaId }) => areaId === change.toAreaId)?.name;
      return `${name}: closed to arrivals, ${span}; they go ${to ? `to ${to}` : 'elsewhere'}`;
    }
  }
}
