import type { ReactNode } from 'react';
import { Link } from 'react-router-dom';
import type { Outlook, Tonight } from '../../../shared/api/outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { paths } from '../../app/paths.ts';
import { RiskMark } from '../../../shared/charts/RiskMark.tsx';
import { staleCensusSeconds } from '../../../shared/forecasting/outlook-sentence.ts';
import type { OutlookSentence } from '../../../shared/forecasting/outlook-sentence.ts';
import { Button } from '../../components/Button.tsx';
import { PageHead } from '../../components/PageHead.tsx';
import { formatAge, formatDate, formatDay, formatTime } from '../../lib/format.ts';

const saidElsewhere: ReadonlySet<Tonight['cautions'][number]['kind']> = new Set([
  'census old',
  'model old',
  'area not counted',
]);

/** Keeps a number and its sign on one line. */
const bound = (text: string) => text.replace(/ %/g, '\u00a0%');

/** The answer as a sentence, what would help, why it moved, and how old its grounds are. */
export function OutlookHead({
  tonight,
  outlook,
  site,
  sentence,
  staleNote,
  mayPrintHandover,
  onMeeting,
}: {
  tonight: Tonight;
  outlook: Outlook;
  site: Site;
  sentence: OutlookSentence;
  /** Said when the page could not be refreshed: the last good outlook stays readable with its age. */
  staleNote: ReactNode;
  mayPrintHandover: boolean;
  onMeeting: () => void;
}) {
  // What the sentence or the ages say already is not said twice.
  const others = tonight.cautions.filter((caution) => !saidElsewhere.has(caution.kind));
  return (
    <PageHead
      tab={`Tonight, ${site.name}`}
      title={bound(sentence.headline)}
      lede={
        <>
          <p className="max-w-[58rem]">
            {sentence.lede.map((part, index) =>
              part.strong ? (
                <b key={index} className="text-ink">
                  {bound(part.text)}
                </b>
              ) : (
                <span key={index}>{bound(part.text)}</span>
              ),
            )}
          </p>
          {tonight.moved ? <p className="mt-1 text-side text-ink2">{bound(tonight.moved)}</p> : null}
          {others.map((caution) => (
            <p key={caution.kind + caution.text} className="mt-1 flex gap-2 text-side font-extrabold text-ink">
              <RiskMark step={3} className="mt-1 h-4 w-5 shrink-0" />
              {bound(caution.text)}
            </p>
          ))}
          {staleNote}
        </>
      }
      aside={<Ages {...{ tonight, outlook, site, mayPrintHandover, onMeeting }} />}
    />
  );
}

function Ages({
  tonight,
  outlook,
  site,
  mayPrintHandover,
  onMeeting,
}: {
  tonight: Tonight;
  outlook: Outlook;
  site: Site;
  mayPrintHandover: boolean;
  onMeeting: () => void;
}) {
  const { now } = tonight;
  const taken = outlook.census.flatMap((entry) => (entry.takenAt === null ? [] : [entry.takenAt]));
  const oldest = taken.length > 0 ? Math.min(...taken) : null;
  const modelOld = tonight.cautions.find((caution) => caution.kind === 'model old');
  const censusOld = tonight.cautions.find((caution) => caution.kind === 'census old');
  return (
    <div className="flex flex-wrap gap-x-6 lg:block">
      {oldest === null ? (
        <Caution>No census in force.</Caution>
      ) : censusOld || now - oldest > staleCensusSeconds ? (
        <Caution>{censusOld?.text ?? `Census ${formatAge(now - oldest)} old. Enter a new one before you act.`}</Caution>
      ) : (
        <div>
          {taken.length > 1 && Math.max(...taken) - oldest > 300 ? 'Oldest census' : 'Census'}{' '}
          <b className="text-ink">{formatAge(now - oldest)} old</b>, {formatTime(oldest, site.timeZone)}
        </div>
      )}
      {modelOld ? (
        <Caution>{modelOld.text}</Caution>
      ) : (
        <div>
          Model <b className="text-ink">{formatAge(now - outlook.model.fittedAt)} old</b>, fitted{' '}
          {formatDate(outlook.model.fittedAt, site.timeZone)}
        </div>
      )}
      <div className="flex flex-wrap gap-x-6">
        {mayPrintHandover ? (
          <Link
            to={paths.handover(site.id)}
            className="link inline-flex min-h-6 items-center font-bold text-ink print:hidden"
          >
            Print the handover sheet
          </Link>
        ) : (
          <Button look="quiet" className="text-side" onClick={() => window.print()}>
            Print this page
          </Button>
        )}
        <Button look="quiet" className="text-side" onClick={onMeeting}>
          Bed meeting
        </Button>
      </div>
      {oldest === null ? null : (
        <div className="hidden font-bold text-ink print:block">
          {site.name}. Do not use after {formatTime(oldest + staleCensusSeconds, site.timeZone)},{' '}
          {formatDay(oldest + staleCensusSeconds, site.timeZone, 'short')}.
        </div>
      )}
    </div>
  );
}

function Caution({ children }: { children: ReactNode }) {
  return (
    <div className="flex max-w-80 gap-2 font-extrabold text-ink">
      <RiskMark step={3} className="mt-1 h-4 w-5 shrink-0" />
      <span>{children}</span>
    </div>
  );
}
