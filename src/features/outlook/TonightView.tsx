import { useCallback, useEffect, useState } from 'react';
import type { ReactNode } from 'react';
import type { Tonight } from '../../../shared/api/outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import type { Census } from '../../../shared/api/censuses.ts';
import { outlookSentence } from '../../../shared/forecasting/outlook-sentence.ts';
import type { OutlookSentence } from '../../../shared/forecasting/outlook-sentence.ts';
import { Button } from '../../components/Button.tsx';
import { Notice } from '../../components/Notice.tsx';
import { asApiError } from '../../lib/api-error.ts';
import { formatTime, zoneOf } from '../../lib/format.ts';
import type { Rights } from './AreaGutter.tsx';
import { NoOutlook } from './NoOutlook.tsx';
import { OutlookHead } from './OutlookHead.tsx';
import { TonightBoard } from './TonightBoard.tsx';
import { CensusEntryProvider, useCensusEntry } from './use-census-entry.ts';
import type { CensusEntry } from './use-census-entry.ts';

/** The headline and lede of an outlook that is on the page. */
export function sentenceOf(tonight: Tonight, site: Site): OutlookSentence | null {
  const { outlook } = tonight;
  if (!outlook) return null;
  return outlookSentence({
    result: outlook.result,
    areas: site.areas.map((area) => ({
      areaId: area.id,
      name: area.name,
      spaceKind: area.spaceKind,
      spaces: area.spaces,
      alertLimit: area.alertLimit,
      censusTakenAt: outlook.census.find((entry) => entry.areaId === area.id)?.takenAt ?? null,
    })),
    now: tonight.now,
    zone: zoneOf(site.timeZone),
  });
}

/** Tonight of one site once its parts are loaded: head, board, census entry and what is said when a save came through. */
export function TonightView({
  tonight: loaded,
  loadedAt,
  site,
  census,
  rights,
  refreshError,
  emptyActions,
  howHref,
}: {
  tonight: Tonight;
  /** When it was loaded, this device's clock, milliseconds. */
  loadedAt: number;
  site: Site;
  census: Census | undefined;
  rights: Rights;
  /** Why the newest refresh failed, if it did. */
  refreshError: unknown;
  emptyActions: ReactNode;
  howHref: string;
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

  return (
    <CensusEntryProvider value={entry}>
      {outlook && sentence ? (
        <>
          <OutlookHead
            {...{ tonight, outlook, site, sentence }}
            staleNote={
              refreshError ? (
                <Notice kind="caution" className="mt-2" title={`${asApiError(refreshError).title}.`} live>
                  <p>
                    This is the outlook of {formatTime(outlook.issuedAt, site.timeZone)}, as it was last loaded. The
                    page tries again by itself.
                  </p>
                </Notice>
              ) : null
            }
          />
          <SaveReport
            entry={entry}
            headline={sentence.headline}
            timeZone={site.timeZone}
            computing={tonight.computing}
          />
          <TonightBoard {...{ tonight, outlook, site, rights, howHref }} worstAreaId={sentence.worstAreaId} />
        </>
      ) : (
        <NoOutlook {...{ tonight, site, rights }} actions={emptyActions} />
      )}
      {rights.enterCensus && outlook ? <ActionBar entry={entry} /> : null}
    </CensusEntryProvider>
  );
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

/** On a tablet or phone the two presses of every round stay at the foot, within reach of a thumb. */
function ActionBar({ entry }: { entry: CensusEntry }) {
  const edited = entry.form.formState.isDirty;
  return (
    <div className="sticky bottom-0 z-30 mt-2 flex gap-3 border-t border-hair bg-paper px-page py-2 lg:hidden print:hidden">
      <Button
        className="flex-1"
        onClick={edited ? entry.save : entry.nothingChanged}
        busy={entry.saving}
        busyText="Saving…"
      >
        {edited ? 'Save census' : 'Nothing changed'}
      </Button>
      <Button look="second" onClick={() => window.print()}>
        Print
      </Button>
    </div>
  );
}
