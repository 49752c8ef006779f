import type { WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { inChargeSpans } from '../../../shared/domain/in-charge-spans.ts';
import type { PlanChange, PlanChangeKind } from '../../../shared/domain/plan-change.ts';
import type { ShiftTime } from '../../../shared/domain/shift-times.ts';
import type { Zone } from '../../../shared/domain/zoned-time.ts';

const halfHour = 1800;

/** The full or half hour of the site at or before an instant. */
export function halfHourBefore(zone: Zone, at: number): number {
  return at - (((zone.toLocal(at) % halfHour) + halfHour) % halfHour);
}

/** Each shift while it is in charge within the hours looked at, from the half hour under way on. */
export function spansOf(basis: WhatIfBasis, zone: Zone): ShiftTime[] {
  const { hours } = basis.exact;
  return inChargeSpans(basis.shifts, halfHourBefore(zone, basis.issuedAt), hours[hours.length - 1]);
}

/**
 * A new change of a kind as it first stands: at the area and shift that are worst now, so that the first drag shows something.
 * @param worst place of the worst area, and its hour
 */
export function newChange(
  kind: PlanChangeKind,
  basis: WhatIfBasis,
  zone: Zone,
  worst: { area: number; at: number },
): PlanChange {
  const { areaId, bedStep } = basis.areas[worst.area];
  const spans = spansOf(basis, zone);
  const span = spans.find(({ from, to }) => from <= worst.at && worst.at < to) ?? spans.at(0);
  const start = halfHourBefore(zone, basis.issuedAt) + halfHour;
  const { from, to } = span ?? { from: start, to: start + 8 * 3600 };
  switch (kind) {
    case 'demand':
      return { kind, areaId: null, percent: 10 };
    case 'stay':
      return { kind, areaId: null, who: 'admitted', percent: -10 };
    case 'beds':
      return { kind, areaId, from, to, beds: bedStep };
    case 'boarding out': {
      const boarding = basis.areas.filter((area) => (area.boarding ?? 0) > 0);
      const most = boarding.reduce(
        (best, area) => ((area.boarding ?? 0) > (best.boarding ?? 0) ? area : best),
        boarding.at(0) ?? basis.areas[worst.area],
      );
      return { kind, areaId: most.areaId, patients: 1, by: halfHourBefore(zone, basis.issuedAt) + 4 * 3600 };
    }
    case 'surge':
      return { kind, areaId, from, to: Math.min(to, from + 2 * 3600), patients: 10 };
    case 'closed':
      return { kind, areaId, from, to, toAreaId: null };
  }
}
