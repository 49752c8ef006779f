import { useMemo } from 'react';
import { Link } from 'react-router-dom';
import type { Census } from '../../../shared/api/censuses.ts';
import type { Outlook, OutlookThen, Tonight } from '../../../shared/api/outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { paths } from '../../app/paths.ts';
import { PageHead } from '../../components/PageHead.tsx';
import { formatDay, formatTime, zoneOf } from '../../lib/format.ts';
import { TonightBoard } from './TonightBoard.tsx';
import { sentenceOf } from './sentence-of.ts';
import { thenInWords } from './then-in-words.ts';
import { buildBoard } from './tonight-board.ts';
import { useBoardRows } from './use-board-rows.ts';
import { CensusEntryProvider, useCensusEntry } from './use-census-entry.ts';

/** The counts that an outlook was computed from, in the form of the newest census. */
function censusOf(outlook: Outlook): Census {
  return {
    areas: outlook.census.flatMap(({ areaId, takenAt, present, waiting, boarding }) =>
      takenAt === null || present === null || waiting === null || boarding === null
        ? []
        : [{ areaId, takenAt, present, waiting, boarding, enteredBy: '' }],
    ),
    undecided: outlook.undecided && { ...outlook.undecided, ambulancesHolding: null },
    arrivalsSinceMidnight: null,
  };
}

const reading = { enterCensus: false, changeBeds: false, acknowledge: false };

/** Tonight as it stood when an earlier outlook was issued, with what then happened drawn over it. Nothing can be entered. */
export function TonightThen({ then, site, howHref }: { then: OutlookThen; site: Site; howHref: string }) {
  const { outlook, past, acknowledgements, earlier, later } = then;
  const tonight: Tonight = {
    now: outlook.issuedAt,
    outlook,
    computing: false,
    missing: null,
    past,
    cautions: [],
    moved: null,
    acknowledgements,
    lastNight: null,
  };
  const census = useMemo(() => censusOf(outlook), [outlook]);
  const entry = useCensusEntry(site, census, () => outlook.issuedAt, false);
  const sentence = sentenceOf(tonight, site);
  const rows = useBoardRows(sentence?.worstAreaId ?? null);
  const board = buildBoard(tonight, outlook, site, zoneOf(site.timeZone));
  const time = formatTime(outlook.issuedAt, site.timeZone);
  const happened = thenInWords(board, site.timeZone);
  return (
    <CensusEntryProvider value={entry}>
      <PageHead
        tab={`As it stood at ${time}, ${site.name}`}
        title={`As it stood at ${time}`}
        lede={
          <>
            <p className="max-w-[58rem]">
              {formatDay(outlook.issuedAt, site.timeZone)}. It said: <b className="text-ink">{sentence?.headline}</b>{' '}
              {sentence?.lede.map((part) => part.text).join('')}
            </p>
            <h2 className="sr-only">What then happened</h2>
            <ul className="mt-1 text-side">
              {happened.map((line) => (
                <li key={line}>{line}</li>
              ))}
            </ul>
          </>
        }
        aside={
          <nav aria-label="Other outlooks" className="flex flex-wrap gap-x-6 lg:grid lg:justify-items-start">
            <Link className="link inline-flex min-h-6 items-center font-bold text-ink" to={paths.tonight(site.id)}>
              Back to now
            </Link>
            {earlier ? (
              <Link className="link inline-flex min-h-6 items-center" to={paths.tonightThen(site.id, earlier.id)}>
                The one before, {formatTime(earlier.issuedAt, site.timeZone)}
              </Link>
            ) : null}
            {later ? (
              <Link className="link inline-flex min-h-6 items-center" to={paths.tonightThen(site.id, later.id)}>
                The one after, {formatTime(later.issuedAt, site.timeZone)}
              </Link>
            ) : null}
          </nav>
        }
      />
      <TonightBoard {...{ tonight, outlook, site, howHref, rows }} rights={reading} then />
    </CensusEntryProvider>
  );
}
