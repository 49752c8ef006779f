import { memo, useMemo, useState } from 'react';
import type { WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { dayAndTime, type PlanChange } from '../../../shared/domain/plan-change.ts';
import { formatChance } from '../../../shared/domain/risk-word.ts';
import type { ShiftTime } from '../../../shared/domain/shift-times.ts';
import type { Zone } from '../../../shared/domain/zoned-time.ts';
import {
  changeCells,
  riskLeft,
  smallestChange,
  type SmallestChange,
} from '../../../shared/forecasting/smallest-change.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { Notice } from '../../components/Notice.tsx';
import { formatCount, formatNumber } from '../../lib/format.ts';
import { unitOf } from './plan-words.ts';
import type { PlanPreviewer } from './preview-plan.ts';
import { SliderField } from './SliderField.tsx';

/** The fewest bed-hours that meet a risk at every full hour, and what is left if only some can be had. */
export const SmallestChangePanel = memo(function SmallestChangePanel({
  previewer,
  zone,
  spans,
  changes,
  onTry,
}: {
  previewer: PlanPreviewer;
  zone: Zone;
  spans: readonly ShiftTime[];
  /** The plan in hand: what it says of demand and stays stands; its beds are added to. */
  changes: readonly PlanChange[];
  /** Takes the answer over as changes of the plan in hand. */
  onTry: (beds: PlanChange[]) => void;
}) {
  const { basis } = previewer;
  const [risk, setRisk] = useState(Math.round(basis.planningRisk * 100));
  const [bedHours, setBedHours] = useState<number | null>(null);
  const cells = useMemo(() => {
    const need = previewer.need(changes);
    const areas = basis.areas.map((area, a) => ({ ...area, laws: need[a].laws }));
    return changeCells({ hours: basis.exact.hours, spans, areas });
  }, [basis, previewer, spans, changes]);
  const riskFault = risk >= 1 && risk <= 50 ? undefined : 'A whole per cent from 1 to 50';
  const all = riskFault ? null : smallestChange(cells, risk / 100);
  const most = all?.bedHours ?? 0;
  const asked = Math.min(bedHours ?? Math.round(most / 2), Math.ceil(most));
  const part = all && most > 0 && asked >= 0 ? riskLeft(cells, asked) : null;
  const hasOthers = changes.some(({ kind }) => kind !== 'beds');
  const asChanges = (answer: SmallestChange): PlanChange[] =>
    answer.added
      .filter(({ beds }) => beds > 0)
      .map(({ area, span, beds }) => ({
        kind: 'beds',
        areaId: basis.areas[area].areaId,
        from: spans[span].from,
        to: spans[span].to,
        beds,
      }));
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-3" aria-labelledby="smallest-change">
      <h2 id="smallest-change" className="text-section">
        Smallest change
      </h2>
      <p className="max-w-[58rem] text-ink2">
        The fewest bed-hours, in whole steps by area and shift, after which the chance of shortfall at every full hour
        is at most the risk you choose; by the exact method
        {hasOthers ? ', with the arrivals and stays of the plan in hand' : ''}. It only adds, never goes past the bed
        spaces that exist and never leaves an area below its safe minimum. A low chance is no reason to staff below it.
      </p>
      <div className="grid max-w-[58rem] gap-4 sm:grid-cols-2">
        <SliderField
          label="Risk at every full hour"
          unit="%"
          value={risk}
          min={1}
          max={50}
          error={riskFault}
          onChange={setRisk}
        />
        {most > 0 ? (
          <SliderField
            label="If only this many bed-hours can be had"
            unit="hours"
            value={asked}
            min={0}
            max={Math.ceil(most)}
            onChange={(value) => setBedHours(Math.max(0, value))}
          />
        ) : null}
      </div>
      {all ? (
        <>
          <p aria-live="polite">
            <b>
              {most === 0
                ? `No bed-hours to add: every full hour is at ${formatChance(all.worst)} or less.`
                : `${formatNumber(most)} bed-hours bring every full hour to ${formatChance(all.worst)} or less.`}
            </b>{' '}
            {most > 0 ? (
              part === null ? (
                <span>{formatNumber(asked)} are not enough to bring every area to its safe minimum.</span>
              ) : (
                <span>
                  With {formatNumber(asked)} the worst hour is left at {formatChance(part.worst)} (
                  {formatNumber(part.bedHours)} are used).
                </span>
              )
            ) : null}
          </p>
          {all.added.some(({ spacesEnd }) => spacesEnd) ? (
            <Notice kind="caution" title="In some shifts every bed space is staffed and the risk is still not met.">
              <p>Beds alone cannot bring those lower: see the rows that say so.</p>
            </Notice>
          ) : null}
          {all.added.length > 0 ? (
            <AddedTable basis={basis} zone={zone} spans={spans} answer={all} part={part} />
          ) : null}
          <div className="flex flex-wrap gap-4">
            {most > 0 ? (
              <Button look="second" onClick={() => onTry(asChanges(all))}>
                Put all {formatNumber(most)} bed-hours into the plan in hand
              </Button>
            ) : null}
            {part && part.bedHours > 0 && part.bedHours < most ? (
              <Button look="second" onClick={() => onTry(asChanges(part))}>
                Put {formatNumber(part.bedHours)} bed-hours into it
              </Button>
            ) : null}
          </div>
        </>
      ) : null}
    </section>
  );
});

const rowsAtFirst = 12;

function AddedTable({
  basis,
  zone,
  spans,
  answer,
  part,
}: {
  basis: WhatIfBasis;
  zone: Zone;
  spans: readonly ShiftTime[];
  answer: SmallestChange;
  part: SmallestChange | null;
}) {
  const [whole, setWhole] = useState(false);
  const rows = [...answer.added].sort((a, b) => b.before - a.before);
  const partly = new Map(
    part?.added.map(({ area, span, beds, after }) => [`${String(area)} ${String(span)}`, { beds, after }]),
  );
  return (
    <>
      <DataTable
        caption="Beds to add, by area and shift"
        rows={whole ? rows : rows.slice(0, rowsAtFirst)}
        rowKey={({ area, span }) => `${String(area)} ${String(span)}`}
        columns={[
          { key: 'area', header: 'Area', rowHeader: true, cell: ({ area }) => basis.areas[area].name },
          {
            key: 'shift',
            header: 'Shift',
            cell: ({ span }) =>
              `${spans[span].name}, ${dayAndTime(zone, spans[span].from)} to ${dayAndTime(zone, spans[span].to)}`,
          },
          {
            key: 'beds',
            header: 'To add',
            cell: ({ area, beds }) => (beds === 0 ? 'none can be added' : formatCount(beds, unitOf(basis.areas[area]))),
          },
          {
            key: 'hours',
            header: 'Bed-hours',
            figure: true,
            cell: ({ bedHours }) => formatNumber(bedHours, bedHours % 1 === 0 ? 0 : 1),
          },
          { key: 'before', header: 'Worst hour as is', figure: true, cell: ({ before }) => formatChance(before) },
          {
            key: 'after',
            header: 'Then',
            figure: true,
            cell: ({ after, spacesEnd }) => (
              <>
                {formatChance(after)}
                {spacesEnd ? <span className="block text-quiet font-bold text-warn">every space staffed</span> : null}
              </>
            ),
          },
          {
            key: 'part',
            header: 'With part of the bed-hours',
            figure: true,
            cell: ({ area, span, before }) => {
              const one = partly.get(`${String(area)} ${String(span)}`);
              return one && one.beds > 0
                ? `+${String(one.beds)}: ${formatChance(one.after)}`
                : `none: ${formatChance(before)}`;
            },
          },
          {
            key: 'notice',
            header: 'Notice',
            cell: ({ area, span }) => {
              const { noticeHours } = basis.areas[area];
              const by = spans[span].from - noticeHours * 3600;
              return by < basis.issuedAt
                ? `Too late for the ${formatCount(noticeHours, 'hour')} of notice`
                : `Ask by ${dayAndTime(zone, by)}`;
            },
          },
        ]}
      />
      {rows.length > rowsAtFirst ? (
        <Button look="quiet" className="justify-self-start" aria-expanded={whole} onClick={() => setWhole(!whole)}>
          {whole ? 'Show the worst alone' : `Show all ${String(rows.length)} rows`}
        </Button>
      ) : null}
    </>
  );
}
