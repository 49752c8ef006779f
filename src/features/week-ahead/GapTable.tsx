import { useState } from 'react';
import type { WeekOutlook } from '../../../shared/api/week-outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { RiskMark } from '../../../shared/charts/RiskMark.tsx';
import { formatChance, riskStep, riskWord } from '../../../shared/domain/risk-word.ts';
import { byLastChance, mayStillBook, weekGaps } from '../../../shared/forecasting/week-gaps.ts';
import type { WeekGap } from '../../../shared/forecasting/week-gaps.ts';
import { lentBeds } from '../../../shared/forecasting/lent-beds.ts';
import { riskInWords } from '../../../shared/forecasting/week-sentence.ts';
import { Button } from '../../components/Button.tsx';
import { ChanceFigure } from '../../components/ChanceFigure.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import type { Column } from '../../components/DataTable.tsx';
import { formatCount, formatDay, formatNumber, formatTime } from '../../lib/format.ts';
import { shiftName } from './week-board.ts';
import type { GapOrder } from './week-choices.ts';

const shownFirst = 8;
const looks = ['bg-r1 text-r1i', 'bg-r2 text-r2i', 'bg-r3 text-r3i', 'bg-r4 text-r4i', 'bg-r5 text-r5i'];
/** More strokes than this cannot be counted at a glance. */
const mostStrokes = 48;

/** The gaps of the days shown, in the order asked for. */
export function orderedGaps(outlook: WeekOutlook, now: number, until: number, order: GapOrder): WeekGap[] {
  const gaps = weekGaps(outlook.result, now, until);
  return order === 'worst' ? gaps : byLastChance(gaps, now);
}

const keyOf = (gap: WeekGap) => `${gap.areaId} ${String(gap.shift.from)}`;

/** Each stroke a bed space: short ones planned, tall ones not in the plan. */
function Strokes({ planned, missing }: { planned: number; missing: number }) {
  if (planned + missing > mostStrokes) return null;
  const width = (planned + missing) * 5;
  return (
    <svg width={width} height={20} viewBox={`0 0 ${String(width)} 20`} aria-hidden="true" className="print:hidden">
      {Array.from({ length: planned + missing }, (_, index) => (
        <rect
          key={index}
          x={index * 5}
          y={index < planned ? 4 : 0}
          width={index < planned ? 3 : 4}
          height={index < planned ? 12 : 20}
          fill={index < planned ? 'var(--edge)' : 'var(--s3)'}
        />
      ))}
    </svg>
  );
}

function Chance({ chance }: { chance: number }) {
  const step = riskStep(chance);
  return (
    <span className={`inline-flex items-center gap-2 px-2 py-1 font-bold whitespace-nowrap ${looks[step - 1]}`}>
      <span aria-hidden="true">
        <ChanceFigure chance={chance} />
      </span>
      <span className="sr-only">{formatChance(chance)},</span>
      <RiskMark step={step} className="h-4 w-5" />
      {riskWord(chance)}
    </span>
  );
}

/** Where the plan falls short of the need at the planning risk, worst first or by the last chance to book. */
export function GapTable({
  outlook,
  site,
  now,
  until,
  order,
  onOrder,
}: {
  outlook: WeekOutlook;
  site: Site;
  now: number;
  until: number;
  order: GapOrder;
  onOrder: (order: GapOrder) => void;
}) {
  const [all, setAll] = useState(false);
  const gaps = orderedGaps(outlook, now, until, order);
  const risk = riskInWords(outlook.result.planningRisk);
  const nameOf = (areaId: string) => site.areas.find(({ id }) => id === areaId)?.name ?? areaId;
  // The worst gap is lent to first, whichever order is looked at.
  const worstFirst = weekGaps(outlook.result, now, until);
  const lent = new Map(lentBeds(outlook.result, worstFirst, site.areas).map((beds, g) => [keyOf(worstFirst[g]), beds]));
  const lends = [...lent.values()].some((beds) => beds.length > 0);
  const mayLend = gaps.some(({ areaId }) => site.areas.some(({ lendsTo }) => lendsTo.includes(areaId)));
  const stated = gaps.some(({ need }) => need.nurseHours !== null);
  const columns: Column<WeekGap>[] = [
    {
      key: 'shift',
      header: 'Shift',
      rowHeader: true,
      cell: ({ shift }) => (
        <span className="whitespace-nowrap">
          {shiftName(shift, site.timeZone)}
          <span className="block text-quiet font-semibold text-ink2">
            {formatTime(shift.from, site.timeZone)} to {formatTime(shift.to, site.timeZone)}
          </span>
        </span>
      ),
    },
    { key: 'area', header: 'Area', cell: (gap) => nameOf(gap.areaId) },
    {
      key: 'strokes',
      header: <span className="sr-only">Drawn</span>,
      cell: ({ need }) => <Strokes planned={need.staffedLeast} missing={need.bedsToAdd} />,
    },
    {
      key: 'planned',
      header: 'Planned',
      figure: true,
      cell: ({ need }) =>
        need.staffedLeast === need.staffedMost
          ? formatNumber(need.staffedLeast)
          : `${formatNumber(need.staffedLeast)}–${formatNumber(need.staffedMost)}`,
    },
    {
      key: 'gap',
      header: `To add at ${risk}`,
      figure: true,
      cell: ({ need }) => (
        <>
          <b className="text-ink">+{formatNumber(need.bedsToAdd)}</b>
          {need.bedsThatDoNotExist > 0 ? (
            <span className="block text-quiet font-bold text-ink">
              {formatNumber(need.bedsThatDoNotExist)} {need.bedsThatDoNotExist === 1 ? 'does' : 'do'} not exist
            </span>
          ) : null}
        </>
      ),
    },
    ...(lends
      ? [
          {
            key: 'lent',
            header: 'Could be lent',
            cell: (gap: WeekGap) => {
              const beds = lent.get(keyOf(gap)) ?? [];
              return beds.length === 0
                ? 'none'
                : beds.map((one) => (
                    <span key={one.areaId} className="block whitespace-nowrap">
                      {formatNumber(one.beds)} by {nameOf(one.areaId)}
                    </span>
                  ));
            },
          },
        ]
      : []),
    { key: 'chance', header: 'Some time short', cell: ({ need }) => <Chance chance={need.someTime} /> },
    {
      key: 'every',
      header: 'With every space',
      figure: true,
      cell: ({ need }) => formatChance(need.someTimeWithEverySpace),
    },
    ...(stated
      ? [
          {
            key: 'nurses',
            header: 'Nurse hours',
            figure: true,
            cell: ({ need }: WeekGap) => (need.nurseHours === null ? 'not stated' : formatNumber(need.nurseHours, 1)),
          },
        ]
      : []),
    {
      key: 'book',
      header: 'Last chance to book',
      cell: (gap) =>
        mayStillBook(gap, now) ? (
          <span className="whitespace-nowrap">
            {formatDay(gap.need.lastChanceAt, site.timeZone, 'short')},{' '}
            {formatTime(gap.need.lastChanceAt, site.timeZone)}
          </span>
        ) : (
          <b className="text-ink">passed</b>
        ),
    },
  ];
  return (
    <section aria-labelledby="gaps-title">
      <div className="flex flex-wrap items-baseline justify-between gap-x-6 gap-y-1">
        <h2 id="gaps-title" className="text-section">
          {order === 'worst' ? 'Worst gaps first' : 'Gaps by last chance to book'}
        </h2>
        <Button look="quiet" className="text-side" onClick={() => onOrder(order === 'worst' ? 'booking' : 'worst')}>
          {order === 'worst' ? 'Order by last chance to book' : 'Order by size'}
        </Button>
      </div>
      <p className="mb-2 max-w-3xl text-quiet text-ink2">
        To add: what brings the chance of any shortfall in the shift to {risk}, in the area’s own steps. Each stroke is
        a bed space; tall strokes are not in the plan. The last chance to book is the shift’s lead time, or the area’s
        notice where that is longer.
        {lends
          ? ' Could be lent: what areas that may lend to it have beyond their own planning risk and safe minimum all through the shift; every bed is counted once, for the worst gap first.'
          : mayLend
            ? ' No area that may lend to another can spare beds in these shifts and stay within its own planning risk.'
            : ''}
        {stated ? ' Nurse hours by your site’s own ratio.' : ''}
      </p>
      <DataTable
        caption="Gaps between need and plan"
        captionHidden
        columns={columns}
        rows={all ? gaps : gaps.slice(0, shownFirst)}
        rowKey={keyOf}
        empty={`At a ${risk} risk no shift of these days needs more than is planned.`}
      />
      {gaps.length > shownFirst ? (
        <Button look="quiet" className="mt-2 text-side" onClick={() => setAll(!all)}>
          {all ? 'Only the first' : `All ${formatCount(gaps.length, 'gap')}`}
        </Button>
      ) : null}
      <p className="mt-3 max-w-3xl text-quiet text-ink2">
        A low chance is not a reason to staff below your safe minimum. More beds alone may not shorten stays.
      </p>
    </section>
  );
}
