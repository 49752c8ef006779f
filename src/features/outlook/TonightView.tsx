import { useCallback, useEffect, useState } from 'react';
import { flushSync } from 'react-dom';
import type { ReactNode } from 'react';
import type { Outlook, Tonight } from '../../../shared/api/outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import type { Census } from '../../../shared/api/censuses.ts';
import { hoursPastLimit } from '../../../shared/forecasting/hours-past-limit.ts';
import { paths } from '../../app/paths.ts';
import { Button, ButtonLink } from '../../components/Button.tsx';
import { asApiError } from '../../lib/api-error.ts';
import { formatTime, zoneOf } from '../../lib/format.ts';
import type { Rights } from './AreaGutter.tsx';
import { NoOutlook } from './NoOutlook.tsx';
import { OutlookHead } from './OutlookHead.tsx';
import { sentenceOf } from './sentence-of.ts';
import { StaleNote } from './StaleNote.tsx';
import { TonightBoard } from './TonightBoard.tsx';
import { noteFieldId } from './AcknowledgeForm.tsx';
import { askedHours, inChargeSince } from './asked-hours.ts';
import { useBoardRows } from './use-board-rows.ts';
import { CensusEntryProvider, useCensusEntry } from './use-census-entry.ts';
import type { CensusEntry } from './use-census-entry.ts';

/** Tonight of one site once its parts are loaded: head, board, census entry and what is said when a save came through. */
export function TonightView({
  tonight: loaded,
  loadedAt,
  site,
  census,
  rights,
  stale,
  emptyActions,
  howHref,
  nightLog,
}: {
  tonight: Tonight;
  /** When it was loaded, this device's clock, milliseconds. */
  loadedAt: number;
  site: Site;
  census: Census | undefined;
  rights: Rights;
  /** Said where the outlook is not the newest there may be: why, and whether it comes from this device. */
  stale: { error: unknown; fromDevice: boolean } | null;
  emptyActions: ReactNode;
  howHref: string;
  /** What was done so far, under the board. */
  nightLog: ReactNode;
}) {
  // The server's clock, carried on by this device's: a wrong clock here must not date a census into the future.
  const serverNow = useCallback(
    () => loaded.now + Math.max(0, Math.floor((Date.now() - loadedAt) / 1000)),
    [loaded.now, loadedAt],
  );
  const now = useClock(loaded.now, loadedAt, serverNow);
  const tonight = { ...loaded, now };
  const entry = useCensusEntry(site, census, serverNow);
  const sentence = sentenceOf(tonight, site);
  const { outlook } = tonight;
  const worstAreaId = sentence?.worstAreaId ?? null;
  const rows = useBoardRows(worstAreaId);
  const [meetingOpen, setMeetingOpen] = useState(false);
  const asks = rights.acknowledge && outlook ? asksAbout(tonight, outlook, site, worstAreaId) : null;

  return (
    <CensusEntryProvider value={entry}>
      {outlook && sentence ? (
        <>
          <OutlookHead
            {...{ tonight, outlook, site, sentence }}
            mayPrintHandover={rights.acknowledge}
            onMeeting={() => setMeetingOpen(true)}
            staleNote={
              stale ? (
                <StaleNote className="mt-2" issuedAt={outlook.issuedAt} now={now} timeZone={site.timeZone} {...stale} />
              ) : null
            }
          />
          <SaveReport
            entry={entry}
            headline={sentence.headline}
            timeZone={site.timeZone}
            computing={tonight.computing}
          />
          <TonightBoard
            {...{ tonight, outlook, site, rights, howHref, rows }}
            meeting={{ open: meetingOpen, onClose: () => setMeetingOpen(false) }}
          />
        </>
      ) : (
        <NoOutlook
          {...{ tonight, site, rights }}
          actions={emptyActions}
          report={<SaveReport entry={entry} headline="" timeZone={site.timeZone} computing={tonight.computing} />}
        />
      )}
      {nightLog}
      {rights.enterCensus && outlook ? (
        <ActionBar
          entry={entry}
          siteId={site.id}
          timeZone={site.timeZone}
          onAcknowledge={
            asks === null
              ? null
              : () => {
                  // The row may be closed: its note field is there once it is open.
                  flushSync(() => rows.open(asks));
                  document.getElementById(noteFieldId(asks))?.querySelector('input')?.focus();
                }
          }
        />
      ) : null}
    </CensusEntryProvider>
  );
}

/** The area that asks to be acknowledged: the worst, or else the first in the site's order. */
function asksAbout(tonight: Tonight, outlook: Outlook, site: Site, worstAreaId: string | null): string | null {
  const zone = zoneOf(site.timeZone);
  const since = inChargeSince(zone, site.shifts, tonight.now);
  const asking = site.areas
    .filter((area) => {
      const pastTonight = hoursPastLimit(outlook.result, area.id, area, tonight.now, zone);
      const acknowledgements = tonight.acknowledgements.filter((made) => made.areaId === area.id);
      return askedHours({ pastTonight, acknowledgements, since }).length > 0;
    })
    .map((area) => area.id);
  return asking.find((areaId) => areaId === worstAreaId) ?? asking.at(0) ?? null;
}

/** The hour slides and ages grow without a reload: the server's clock as loaded, carried on every few seconds. */
function useClock(loadedNow: number, loadedAt: number, serverNow: () => number): number {
  const [clock, setClock] = useState({ loadedAt, now: loadedNow });
  if (clock.loadedAt !== loadedAt) setClock({ loadedAt, now: loadedNow });
  useEffect(() => {
    const timer = setInterval(() => setClock({ loadedAt, now: serverNow() }), 20_000);
    return () => clearInterval(timer);
  }, [loadedAt, serverNow]);
  return clock.now;
}

/** Read aloud when a save came through: that it did, and the sentence as it now stands. */
function SaveReport({
  entry,
  headline,
  timeZone,
  computing,
}: {
  entry: CensusEntry;
  headline: string;
  timeZone: string;
  computing: boolean;
}) {
  return (
    <div className="page-pad min-h-6 text-side text-ink2 print:hidden" role="status">
      {entry.savedAt !== null && !entry.saving ? (
        <p>
          <b className="text-ink">Census saved at {formatTime(entry.savedAt, timeZone)}.</b>{' '}
          {entry.noOutlook ?? (computing ? 'The outlook is being computed anew.' : 'The outlook was computed anew.')}
          <span className="sr-only"> {headline}</span>
        </p>
      ) : null}
    </div>
  );
}

const lowerFirst = (text: string) => text.charAt(0).toLowerCase() + text.slice(1);

/** On a tablet or phone the presses of every round stay at the foot, within reach of a thumb. */
function ActionBar({
  entry,
  siteId,
  timeZone,
  onAcknowledge,
}: {
  entry: CensusEntry;
  siteId: string;
  timeZone: string;
  /** Null while nothing asks to be acknowledged. */
  onAcknowledge: (() => void) | null;
}) {
  const edited = entry.form.formState.isDirty;
  const said = entry.saving
    ? null
    : entry.error
      ? `Not saved: ${lowerFirst(asApiError(entry.error).title)}. Your figures are still in the fields.`
      : edited || entry.savedAt === null
        ? null
        : `Saved at ${formatTime(entry.savedAt, timeZone)}.`;
  return (
    <div className="action-bar sticky bottom-0 z-30 mt-2 flex flex-wrap gap-3 border-t border-hair bg-paper px-page py-2 lg:hidden print:hidden">
      {/* The row that was saved and the head of the page may be out of view; both are read aloud where they stand. */}
      {said ? (
        <p aria-hidden="true" className="w-full text-side font-bold text-ink">
          {said}
        </p>
      ) : null}
      <Button
        className="flex-1"
        onClick={edited ? entry.save : entry.nothingChanged}
        busy={entry.saving}
        busyText="Saving…"
      >
        {edited ? 'Save census' : 'Nothing changed'}
      </Button>
      {onAcknowledge ? (
        <Button look="second" className="px-3!" onClick={onAcknowledge}>
          Acknowledge
        </Button>
      ) : null}
      <ButtonLink look="second" className="px-3!" to={paths.handover(siteId)}>
        Print
      </ButtonLink>
    </div>
  );
}
