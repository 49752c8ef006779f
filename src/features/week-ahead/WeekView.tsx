import { useState } from 'react';
import type { ReactNode } from 'react';
import type { Site } from '../../../shared/api/sites.ts';
import type { WeekAhead } from '../../../shared/api/week-outlooks.ts';
import { weekSentence } from '../../../shared/forecasting/week-sentence.ts';
import { Dialog } from '../../components/Dialog.tsx';
import { Notice } from '../../components/Notice.tsx';
import { PageHead } from '../../components/PageHead.tsx';
import { PanelBoundary } from '../../components/PanelBoundary.tsx';
import { RiskKey } from '../../components/RiskKey.tsx';
import { asApiError } from '../../lib/api-error.ts';
import { formatDateTime, zoneOf } from '../../lib/format.ts';
import { AdmissionDays } from './AdmissionDays.tsx';
import { CalendarDays } from './CalendarDays.tsx';
import { ArrivalDays, EveryShift } from './EveryShift.tsx';
import { GapTable } from './GapTable.tsx';
import { LastWeek } from './LastWeek.tsx';
import { buildWeekBoard } from './week-board.ts';
import { useWeekChoices } from './week-choices.ts';
import { weekFiles } from './week-csv.ts';
import { WeekBoard } from './WeekBoard.tsx';
import { WeekHead } from './WeekHead.tsx';
import { WeekHeatMap } from './WeekHeatMap.tsx';
import { WeekWaits } from './WeekWaits.tsx';

const titles = {
  'no model': 'There is no week ahead: no arrival model is in use.',
  'little history': 'There is too little history for a week ahead.',
  'no staffed-bed plan': 'There is no week ahead: no staffed-bed plan is saved.',
  'not computed yet': 'The week ahead is being computed.',
} as const;

/** The week ahead of one site once its parts are loaded. */
export function WeekView({
  week,
  site,
  refreshError,
  emptyActions,
  links,
  calendarLink,
  setLimit,
  how,
  then = false,
}: {
  week: WeekAhead;
  site: Site;
  /** Why the newest refresh failed, if it did. */
  refreshError: unknown;
  emptyActions: ReactNode;
  links: ReactNode;
  /** Where the site's own calendar is kept, for those who keep it. */
  calendarLink: ReactNode;
  /** Where the site's wait limit is kept, for those who keep it. */
  setLimit: ReactNode;
  how: ReactNode;
  /** An earlier week as it stood, not the newest. */
  then?: boolean;
}) {
  const [choices, change] = useWeekChoices();
  const [tableOpen, setTableOpen] = useState(false);
  const { outlook } = week;
  if (!outlook) {
    return (
      <PageHead
        tab={`Week ahead, ${site.name}`}
        title={titles[week.missing?.reason ?? 'not computed yet']}
        lede={
          <>
            <p className="max-w-3xl">{week.missing?.next ?? 'It appears here by itself within a minute.'}</p>
            <div className="mt-4 flex flex-wrap gap-4">{emptyActions}</div>
          </>
        }
      />
    );
  }
  const board = buildWeekBoard(week, outlook, site, choices.days);
  const sentence = weekSentence({
    result: outlook.result,
    areas: site.areas.map(({ id, name, spaceKind }) => ({ areaId: id, name, spaceKind })),
    now: week.now,
    until: board.until,
    days: choices.days,
    zone: zoneOf(site.timeZone),
  });
  const part = 'mt-10 print:break-inside-avoid';
  return (
    <>
      <WeekHead
        {...{ week, outlook, site, sentence, links }}
        days={choices.days}
        onDays={(days) => change({ days })}
        files={weekFiles(week, outlook, site, board.until)}
        staleNote={
          refreshError ? (
            <Notice kind="caution" className="mt-2" title={`${asApiError(refreshError).title}.`} live>
              <p>
                This is the week ahead of {formatDateTime(outlook.issuedAt, site.timeZone)}, as it was last loaded. The
                page tries again by itself.
              </p>
            </Notice>
          ) : null
        }
      />
      <WeekBoard {...{ board, week, outlook, site, then }} worstAreaId={sentence.worstAreaId} />
      <div className="page-pad flex flex-wrap items-center gap-x-6 gap-y-2 border-t border-hair pt-3">
        <RiskKey />
        <button
          type="button"
          className="link min-h-6 cursor-pointer text-quiet font-semibold print:hidden"
          onClick={() => setTableOpen(true)}
        >
          The tables behind this
        </button>
        {how}
        <p className="text-quiet text-ink2">
          {then ? '' : 'For tonight read Tonight: it knows the newest census. '}The later a day, the wider its range.
        </p>
      </div>
      <div className="week-parts page-pad pb-6">
        <div className="mt-8">
          <PanelBoundary className="py-4">
            <GapTable
              {...{ outlook, site }}
              now={week.now}
              until={board.until}
              order={choices.order}
              onOrder={(order) => change({ order })}
            />
          </PanelBoundary>
        </div>
        <div className={part}>
          <WeekWaits {...{ outlook, site, setLimit }} until={board.until} />
        </div>
        <div className={part}>
          <PanelBoundary className="py-4">
            <WeekHeatMap
              {...{ outlook, site }}
              areaId={choices.mapAreaId}
              onArea={(mapAreaId) => change({ mapAreaId })}
            />
          </PanelBoundary>
        </div>
        <div className={part}>
          <AdmissionDays {...{ outlook, site }} until={board.until} />
        </div>
        <div className={part}>
          <CalendarDays {...{ outlook, site }} edit={calendarLink} />
        </div>
        {then ? null : (
          <div className={part}>
            <LastWeek {...{ week, site }} />
          </div>
        )}
        <p className="mt-10 max-w-3xl text-quiet text-ink2">
          A forecast is a range. Act on the percentile your policy names, not on the median alone. It does not foresee a
          major incident or a sudden closure: use your incident plan.
        </p>
      </div>
      <Dialog title={`The days ahead, ${site.name}`} open={tableOpen} onClose={() => setTableOpen(false)}>
        <div className="grid grid-cols-[minmax(0,1fr)] gap-8">
          <EveryShift {...{ board, outlook }} />
          <ArrivalDays {...{ outlook, site }} until={board.until} />
          <p className="text-quiet text-ink2">
            Need: patients who would be in the area with bed spaces unlimited, at its highest in each shift. Planned:
            the fewest staffed beds of the shift’s own hours, until the next one begins. Hour by hour the same figures
            are in the CSV files.
          </p>
        </div>
      </Dialog>
    </>
  );
}
