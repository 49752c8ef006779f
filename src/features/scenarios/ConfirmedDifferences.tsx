import { useState } from 'react';
import type { ComparedFigure, Scenario, ScenarioResult, WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { dayAndTime } from '../../../shared/domain/plan-change.ts';
import { formatChance } from '../../../shared/domain/risk-word.ts';
import type { Zone } from '../../../shared/domain/zoned-time.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { SelectField } from '../../components/Field.tsx';
import { formatCount, formatDateTime, formatNumber } from '../../lib/format.ts';
import { saveFile } from '../../lib/save-file.ts';
import { differencesCsv } from './differences-csv.ts';
import { previewGap } from './preview-gap.ts';
import type { PlanPreview } from './preview-plan.ts';

const department = 'department';

function points(value: number): string {
  const rounded = Math.round(value * 1000) / 10;
  return rounded === 0 ? '0' : `${rounded > 0 ? '+' : '−'}${Math.abs(rounded).toFixed(1)}`;
}

const signed = (value: number): string => `${value > 0 ? '+' : ''}${formatNumber(value, 1)}`;

/** The differences of a confirmed plan by shift, each with its interval, and how far the preview was from it. */
export function ConfirmedDifferences({
  plan,
  areas,
  preview,
  siteName,
  zone,
  timeZone,
}: {
  plan: Scenario;
  areas: WhatIfBasis['areas'];
  /** The same plan by the exact method; null where as is has moved since. */
  preview: PlanPreview | null;
  siteName: string;
  zone: Zone;
  timeZone: string;
}) {
  const [chosen, setChosen] = useState(department);
  const { result } = plan;
  if (!result) return null;
  const nameOf = (areaId: string | null) =>
    areaId === null
      ? 'Whole department'
      : (areas.find((area) => area.areaId === areaId)?.name ?? 'An area that is not forecast now');
  const row = result.rows.find(({ areaId }) => (areaId ?? department) === chosen) ?? result.rows[0];
  const { bedHoursShort } = row;
  const gap = preview ? previewGap(result, preview) : null;
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-3">
      <p className="max-w-[58rem] text-ink2">
        Confirmed {formatDateTime(plan.confirmedAt ?? plan.savedAt, timeZone)} by the full simulation on the figures of{' '}
        {formatDateTime(plan.basisIssuedAt, timeZone)}: {formatNumber(result.replications)} pairs of weeks, each once as
        it is and once with the plan, on the same random numbers. A chance here is that of any shortfall during the
        shift; the preview above speaks of the full hours alone, so its figures are lower by definition.
      </p>
      {gap ? (
        <p className="text-ink2">
          Where both speak of the same, the chance at a full hour with the plan, preview and simulation lie{' '}
          {formatNumber(gap.mean * 100, 1)} points apart on average; most of all for {nameOf(gap.widest.areaId)},{' '}
          {dayAndTime(zone, result.hours[gap.widest.hour])}: {formatChance(gap.widest.preview)} in the preview,{' '}
          {formatChance(gap.widest.simulated)} simulated. The simulation takes stays as they are logged; it decides.
        </p>
      ) : null}
      <div className="flex flex-wrap items-end gap-4">
        <div className="w-80 max-w-full">
          <SelectField
            label="Show"
            value={chosen}
            options={result.rows.map(({ areaId }) => ({
              value: areaId ?? department,
              label: areaId === null ? 'Whole department: some area short' : nameOf(areaId),
            }))}
            onChange={(event) => setChosen(event.target.value)}
          />
        </div>
        <Button
          look="second"
          onClick={() =>
            saveFile(`plan-${plan.id}.csv`, 'text/csv;charset=utf-8', [differencesCsv(plan, areas, siteName, timeZone)])
          }
        >
          Differences as CSV
        </Button>
      </div>
      <p>
        <b>
          {nameOf(row.areaId)}: {formatNumber(bedHoursShort.asIs, 1)} bed-hours short in the week as it is,{' '}
          {formatNumber(bedHoursShort.plan, 1)} with the plan
        </b>{' '}
        ({signed(bedHoursShort.difference)}; 95 % interval {signed(bedHoursShort.low)} to {signed(bedHoursShort.high)}).
      </p>
      <DataTable
        caption={
          row.areaId === null
            ? 'Chance that some area is short, by shift'
            : 'Chance of shortfall some time in the shift'
        }
        rows={row.shifts.map((figure, s) => ({ figure, shift: result.shifts[s] }))}
        rowKey={({ shift }) => String(shift.from)}
        columns={[
          {
            key: 'shift',
            header: 'Shift',
            rowHeader: true,
            cell: ({ shift }) => `${dayAndTime(zone, shift.from)}, ${shift.name}`,
          },
          { key: 'as-is', header: 'As is', figure: true, cell: ({ figure }) => formatChance(figure.asIs) },
          { key: 'plan', header: 'With the plan', figure: true, cell: ({ figure }) => formatChance(figure.plan) },
          {
            key: 'difference',
            header: 'Difference, points',
            figure: true,
            cell: ({ figure }) => <b>{points(figure.difference)}</b>,
          },
          {
            key: 'interval',
            header: '95 % interval',
            figure: true,
            cell: ({ figure }) => interval(figure),
          },
        ]}
      />
      <WaitDifferences row={row} result={result} name={nameOf(row.areaId)} zone={zone} />
    </div>
  );
}

/** Who waits past the site's limit, by shift; or why it cannot be told. */
function WaitDifferences({
  row,
  result,
  name,
  zone,
}: {
  row: ScenarioResult['rows'][number];
  result: ScenarioResult;
  name: string;
  zone: Zone;
}) {
  const limit = result.waitLimitMinutes;
  if (limit === undefined || limit === null) {
    return <p className="text-quiet text-ink2">Your site has stated no wait limit, so waits are not compared.</p>;
  }
  if (!row.waits) {
    return (
      <p className="text-quiet text-ink2">
        {name}: waits over {formatCount(limit, 'minute')} cannot be compared
        {row.areaId === null
          ? ' for the areas together: not every area’s logs hold bed-space times.'
          : ': its logs hold no bed-space times.'}
      </p>
    );
  }
  return (
    <>
      <DataTable
        caption={`Patients who wait longer than ${formatCount(limit, 'minute')} for a bed space, on average by shift of arrival`}
        rows={row.waits.map((figure, s) => ({ figure, shift: result.shifts[s] }))}
        rowKey={({ shift }) => String(shift.from)}
        columns={[
          {
            key: 'shift',
            header: 'Shift',
            rowHeader: true,
            cell: ({ shift }) => `${dayAndTime(zone, shift.from)}, ${shift.name}`,
          },
          { key: 'as-is', header: 'As is', figure: true, cell: ({ figure }) => formatNumber(figure.asIs, 1) },
          { key: 'plan', header: 'With the plan', figure: true, cell: ({ figure }) => formatNumber(figure.plan, 1) },
          {
            key: 'difference',
            header: 'Difference',
            figure: true,
            cell: ({ figure }) => <b>{signed(figure.difference)}</b>,
          },
          {
            key: 'interval',
            header: '95 % interval',
            figure: true,
            cell: ({ figure }) => `${signed(figure.low)} to ${signed(figure.high)}`,
          },
        ]}
      />
      <p className="max-w-[58rem] text-quiet text-ink2">
        Averages over at most 2,000 of the pairs. Waits for want of a bed space alone, in order of arrival: in truth
        less urgent patients wait longer. Boarding patients seen out earlier by the plan are not taken out of these
        waits.
      </p>
    </>
  );
}

/** An interval that rounds to nothing says so: no pair differed. */
function interval({ low, high }: ComparedFigure): string {
  const [from, to] = [points(low), points(high)];
  return from === '0' && to === '0' ? 'under 0.1 either way' : `${from} to ${to}`;
}
