import { lazy, Suspense, useState } from 'react';
import { Link } from 'react-router-dom';
import type { Outlook, Tonight } from '../../../shared/api/outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { paths } from '../../app/paths.ts';
import { localDate } from '../../../shared/domain/zoned-time.ts';
import { Dialog } from '../../components/Dialog.tsx';
import { PanelBoundary } from '../../components/PanelBoundary.tsx';
import { PictureTools } from '../../components/PictureTools.tsx';
import { formatTime, formatWeekday, zoneOf } from '../../lib/format.ts';
import { useMediaQuery } from '../../lib/use-media-query.ts';
import type { Rights } from './AreaGutter.tsx';
import { AreaRow } from './AreaRow.tsx';
import { DepartmentRow } from './DepartmentRow.tsx';
import { RibbonRow } from './RibbonRow.tsx';
import { RiskKey } from '../../components/RiskKey.tsx';
import { SkeletonLines } from '../../components/Skeleton.tsx';
import { buildBoard, pastHours } from './tonight-board.ts';
import { UndecidedRow } from './UndecidedRow.tsx';
import type { BoardRows } from './use-board-rows.ts';
import { useRibbon } from '../../lib/use-ribbon.ts';

// The proof behind the drawing and the meeting's table are asked for now and then: their scripts come when they are.
const OutlookTables = lazy(async () => ({ default: (await import('./OutlookTables.tsx')).OutlookTables }));
const BedMeeting = lazy(async () => ({ default: (await import('./BedMeeting.tsx')).BedMeeting }));

/** The night board: ribbon, department, areas in the site's own order, area not decided, key. */
export function TonightBoard({
  tonight,
  outlook,
  site,
  rights,
  rows,
  howHref,
  meeting,
  then = false,
}: {
  tonight: Tonight;
  outlook: Outlook;
  site: Site;
  rights: Rights;
  rows: BoardRows;
  howHref: string;
  /** Whether the bed meeting's table stands over the page; absent where there is none. */
  meeting?: { open: boolean; onClose: () => void };
  /** The board is that of an earlier time. */
  then?: boolean;
}) {
  const desktop = useMediaQuery('(min-width: 1100px)');
  const columnWidth = desktop ? 38 : 40;
  const zone = zoneOf(site.timeZone);
  const board = buildBoard(tonight, outlook, site, zone);
  const firstAhead = board.hours[pastHours]?.at;
  const hiddenColumns = pastHours - (desktop ? 3 : 2);
  const { ref, ...ribbon } = useRibbon(columnWidth, hiddenColumns, firstAhead);
  const [tableOpen, setTableOpen] = useState(false);

  const today = localDate(zone.toLocal(tonight.now));
  const hourNames = board.hours.slice(pastHours).map((hour) => {
    const time = formatTime(hour.at, site.timeZone);
    return localDate(zone.toLocal(hour.at)) === today ? time : `${time} ${formatWeekday(hour.at, site.timeZone)}`;
  });
  const shared = {
    siteId: site.id,
    outlookId: outlook.id,
    timeZone: site.timeZone,
    now: tonight.now,
    rights,
    columnWidth,
    hiddenColumns,
    hourNames,
  };

  return (
    <>
      <div
        ref={ref}
        role="region"
        aria-label="Hours, step with the arrow keys"
        tabIndex={0}
        onKeyDown={ribbon.handleKeyDown}
        className="night-board relative overflow-x-auto overflow-y-clip"
      >
        <div className="relative w-max pb-2">
          <i aria-hidden="true" className="now-line" style={{ ['--past' as string]: pastHours }} />
          <RibbonRow
            {...{ board, outlook, site, columnWidth, hiddenColumns, ribbon, then }}
            now={tonight.now}
            lastNightHref={tonight.lastNight ? paths.tonightThen(site.id, tonight.lastNight.outlookId) : null}
          />
          <PanelBoundary>
            <DepartmentRow
              {...{ board, outlook, tonight, site, rights, columnWidth, hiddenColumns, hourNames, then }}
            />
          </PanelBoundary>
          {board.areas.map((row, index) => (
            <PanelBoundary key={row.area.id}>
              <AreaRow
                {...shared}
                row={row}
                index={index}
                open={rows.isOpen(row.area.id)}
                onToggle={() => rows.toggle(row.area.id)}
                note={rows.noteOf(row.area.id)}
                onNote={(note) => rows.setNote(row.area.id, note)}
              />
            </PanelBoundary>
          ))}
          {then ? null : <UndecidedRow rights={rights} timeZone={site.timeZone} />}
        </div>
      </div>
      <div className="page-pad flex flex-wrap items-center gap-x-6 gap-y-2 border-t border-hair pt-3">
        <RiskKey />
        <button
          type="button"
          className="link min-h-6 cursor-pointer text-quiet font-semibold print:hidden"
          onClick={() => setTableOpen(true)}
        >
          The table behind this
        </button>
        <Link to={howHref} className="link text-quiet font-semibold print:hidden">
          How the numbers are made
        </Link>
        <PictureTools of={ref} title={`${then ? 'As it stood' : 'Tonight'}, ${site.name}`} />
      </div>
      <Dialog title={`The hours ahead, ${site.name}`} open={tableOpen} onClose={() => setTableOpen(false)}>
        <PanelBoundary>
          <Suspense fallback={<SkeletonLines lines={8} label="Loading the tables" />}>
            <OutlookTables {...{ board, site, hourNames }} />
          </Suspense>
        </PanelBoundary>
      </Dialog>
      {meeting ? (
        <Dialog title="Bed meeting" open={meeting.open} onClose={meeting.onClose}>
          <PanelBoundary>
            <Suspense fallback={<SkeletonLines lines={8} label="Loading the bed meeting" />}>
              <BedMeeting {...{ board, outlook, site }} now={tonight.now} />
            </Suspense>
          </PanelBoundary>
        </Dialog>
      ) : null}
    </>
  );
}
