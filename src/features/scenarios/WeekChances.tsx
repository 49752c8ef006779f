import { memo, useMemo, useRef, useState } from 'react';
import type { WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { ChanceWeek } from '../../../shared/charts/ChanceWeek.tsx';
import { dayAndTime } from '../../../shared/domain/plan-change.ts';
import { formatChance } from '../../../shared/domain/risk-word.ts';
import type { ShiftTime } from '../../../shared/domain/shift-times.ts';
import type { Zone } from '../../../shared/domain/zoned-time.ts';
import { ChartReader } from '../../components/ChartReader.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { PictureTools } from '../../components/PictureTools.tsx';
import { formatDay } from '../../lib/format.ts';
import type { PlanPreview } from './preview-plan.ts';

const hourWidth = 6;

/** Every area's chance through the week, as it is and with the plan in hand, with the table of every shift behind it. */
export const WeekChances = memo(function WeekChances({
  basis,
  zone,
  timeZone,
  spans,
  asIs,
  plan,
  planName,
}: {
  basis: WhatIfBasis;
  zone: Zone;
  timeZone: string;
  spans: readonly ShiftTime[];
  asIs: PlanPreview;
  /** What is drawn against as it is; null for that alone. */
  plan: PlanPreview | null;
  planName: string;
}) {
  const { hours } = basis.exact;
  const ref = useRef<HTMLDivElement>(null);
  // Over a hundred rows: made when they are looked at.
  const [opened, setOpened] = useState(false);
  const days = useMemo(() => hours.flatMap((at, h) => (zone.toLocal(at) % 86_400 === 0 ? [h] : [])), [hours, zone]);
  const hourNames = useMemo(() => hours.map((at) => dayAndTime(zone, at)), [hours, zone]);
  const names = [0, ...days].map((h, i, all) => ({ h, room: (all[i + 1] ?? hours.length) - h }));
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-2" aria-labelledby="week-chances">
      <h2 id="week-chances" className="text-section">
        Hour by hour
      </h2>
      <p className="text-ink2">
        Chance of shortfall at each full hour.{' '}
        {plan ? `Filled: with ${planName}. Dotted blue line: as it is.` : 'As it is.'} Dashes: the area’s limit.
      </p>
      <div className="overflow-x-auto" role="region" aria-label="Chances hour by hour, drawn" tabIndex={0}>
        <div ref={ref} className="grid w-max grid-cols-[auto_auto]">
          <div className="sticky left-0 z-[2] w-32 bg-water sm:w-52" />
          <div className="flex" aria-hidden="true">
            {names.map(({ h, room }) => (
              <span
                key={h}
                className="overflow-hidden border-l border-hair pl-1 text-label font-bold whitespace-nowrap text-ink2"
                style={{ width: `${String(room * hourWidth)}px` }}
              >
                {room >= 12 ? formatDay(hours[h], timeZone, 'short') : ''}
              </span>
            ))}
          </div>
          {basis.areas.map((area, a) => (
            <AreaWeek
              key={area.areaId}
              area={area}
              asIs={asIs.areas[a]}
              plan={plan?.areas[a] ?? null}
              days={days}
              hourNames={hourNames}
              worstAt={dayAndTime(zone, hours[(plan ?? asIs).areas[a].worstAt])}
            />
          ))}
        </div>
      </div>
      <PictureTools
        of={ref}
        title={plan ? `Chance of shortfall hour by hour, ${planName}` : 'Chance of shortfall hour by hour'}
      />
      <details className="text-ink2" onToggle={(event) => setOpened(event.currentTarget.open)}>
        <summary className="min-h-11 cursor-pointer py-2 font-bold text-ink">Table of every shift</summary>
        {opened ? (
          <DataTable
            caption="Highest chance of shortfall at a full hour of each shift"
            captionHidden
            rows={basis.areas.flatMap((area, a) =>
              spans.map((span) => {
                const within = hours.flatMap((at, h) => (span.from <= at && at < span.to ? [h] : []));
                const highest = (preview: PlanPreview) =>
                  within.length === 0
                    ? ''
                    : formatChance(Math.max(...within.map((h) => preview.areas[a].shortfall[h])));
                return {
                  key: `${area.areaId} ${String(span.from)}`,
                  area: area.name,
                  shift: `${dayAndTime(zone, span.from)}, ${span.name}`,
                  asIs: highest(asIs),
                  plan: plan ? highest(plan) : '',
                };
              }),
            )}
            rowKey={({ key }) => key}
            columns={[
              { key: 'area', header: 'Area', rowHeader: true, cell: (row) => row.area },
              { key: 'shift', header: 'Shift', cell: (row) => row.shift },
              { key: 'as-is', header: 'As is', figure: true, cell: (row) => row.asIs },
              ...(plan
                ? [{ key: 'plan', header: 'With the plan', figure: true, cell: (row: { plan: string }) => row.plan }]
                : []),
            ]}
          />
        ) : null}
      </details>
    </section>
  );
});

const AreaWeek = memo(function AreaWeek({
  area,
  asIs,
  plan,
  days,
  hourNames,
  worstAt,
}: {
  area: WhatIfBasis['areas'][number];
  asIs: PlanPreview['areas'][number];
  plan: PlanPreview['areas'][number] | null;
  days: readonly number[];
  hourNames: readonly string[];
  worstAt: string;
}) {
  const shown = plan ?? asIs;
  return (
    <>
      <div className="sticky left-0 z-[2] w-32 border-t border-hair bg-water pt-2 pr-3 sm:w-52">
        <div className="text-area">{area.name}</div>
        <div className="text-quiet text-ink2">
          {formatChance(shown.worst).replace(' ', '\u00a0')} at most, {worstAt}
          {plan && Math.round(asIs.worst * 100) !== Math.round(plan.worst * 100)
            ? `; ${formatChance(asIs.worst).replace(' ', '\u00a0')} as it is`
            : ''}
        </div>
      </div>
      <div className="border-t border-hair">
        <ChartReader
          label={`${area.name}, chance of shortfall hour by hour`}
          columnWidth={hourWidth}
          readings={hourNames.map((name, h) => ({
            name,
            text: `${formatChance(shown.shortfall[h])}${plan ? `, ${formatChance(asIs.shortfall[h])} as it is` : ''}; limit ${formatChance(area.alertLimit)}`,
          }))}
        >
          <ChanceWeek
            asIs={asIs.shortfall}
            plan={plan?.shortfall ?? null}
            limit={area.alertLimit}
            days={days}
            hourWidth={hourWidth}
          />
        </ChartReader>
      </div>
    </>
  );
});
