import type { Scenario, WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { csvText } from '../../lib/csv-text.ts';
import { formatDateTime } from '../../lib/format.ts';

const four = (value: number) => Math.round(value * 1e4) / 1e4;

/** A plan's confirmed differences as CSV, with the cautions at its head. */
export function differencesCsv(
  plan: Scenario,
  areas: WhatIfBasis['areas'],
  siteName: string,
  timeZone: string,
): string {
  const { result } = plan;
  if (!result) throw new RangeError('a plan that is not confirmed has no differences');
  const rows = result.rows.flatMap(({ areaId, shifts, bedHoursShort, waits }) => {
    const name =
      areaId === null
        ? 'Whole department'
        : (areas.find((area) => area.areaId === areaId)?.name ?? 'An area that is not forecast now');
    const measure =
      areaId === null ? 'chance that some area is short in the shift' : 'chance of shortfall some time in the shift';
    return [
      ...shifts.map((figure, s) => {
        const { name: shift, from, to } = result.shifts[s];
        return [name, measure, shift, formatDateTime(from, timeZone), formatDateTime(to, timeZone), ...numbers(figure)];
      }),
      ...(waits ?? []).map((figure, s) => {
        const { name: shift, from, to } = result.shifts[s];
        const over = `patients who wait longer than ${String(result.waitLimitMinutes)} min for a bed space, on average`;
        return [name, over, shift, formatDateTime(from, timeZone), formatDateTime(to, timeZone), ...numbers(figure)];
      }),
      [name, 'bed-hours short in the week, on average', '', '', '', ...numbers(bedHoursShort)],
    ];
  });
  return csvText(
    [
      `Shoalmark: plan "${plan.name}" against as is, ${siteName}. Figures of ${formatDateTime(plan.basisIssuedAt, timeZone)} (${timeZone}).`,
      `Full simulation, ${String(result.replications)} pairs on common random numbers, seed ${String(result.seed)}, engine ${result.engineVersion}. Difference: plan minus as is, with its 95 % interval.`,
      'Planning aid. Not for decisions about any individual patient. Follow your clinical governance, escalation policy and local law; a licensed clinician’s judgement comes first.',
      'Stays are taken from nights with today’s doctors, tests and ward beds; more beds alone may not shorten them. A low chance is not a reason to staff below your safe minimum.',
    ],
    ['Area', 'Measure', 'Shift', 'From', 'To', 'As is', 'With the plan', 'Difference', 'Low', 'High'],
    rows,
  );
}

function numbers({
  asIs,
  plan,
  difference,
  low,
  high,
}: {
  asIs: number;
  plan: number;
  difference: number;
  low: number;
  high: number;
}): number[] {
  return [asIs, plan, difference, low, high].map(four);
}
