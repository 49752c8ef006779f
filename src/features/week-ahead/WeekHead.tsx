import type { ReactNode } from 'react';
import type { Site } from '../../../shared/api/sites.ts';
import type { WeekAhead, WeekOutlook } from '../../../shared/api/week-outlooks.ts';
import { RiskMark } from '../../../shared/charts/RiskMark.tsx';
import type { WeekSentence } from '../../../shared/forecasting/week-sentence.ts';
import { Button } from '../../components/Button.tsx';
import { Menu } from '../../components/Menu.tsx';
import { PageHead } from '../../components/PageHead.tsx';
import { formatAge, formatDateTime, formatNumber } from '../../lib/format.ts';
import { saveFile } from '../../lib/save-file.ts';
import { leastDays, mostDays } from './week-choices.ts';
import type { WeekFile } from './week-csv.ts';

const dayChoices = Array.from({ length: mostDays - leastDays + 1 }, (_, index) => leastDays + index);

/** Keeps a number and its sign on one line. */
const bound = (text: string) => text.replace(/ %/g, '\u00a0%');

/** The answer as a sentence, the cautions that are true, how old its grounds are, and what to take away. */
export function WeekHead({
  week,
  outlook,
  site,
  sentence,
  days,
  onDays,
  files,
  staleNote,
  links,
}: {
  week: WeekAhead;
  outlook: WeekOutlook;
  site: Site;
  sentence: WeekSentence;
  days: number;
  onDays: (days: number) => void;
  files: readonly WeekFile[];
  /** Said when the page could not be refreshed. */
  staleNote: ReactNode;
  /** Where else to go from here. */
  links: ReactNode;
}) {
  const { now, plan } = week;
  return (
    <PageHead
      tab={`Week ahead, ${site.name}`}
      title={sentence.headline}
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
          {week.cautions.map((caution) => (
            <p key={caution.kind + caution.text} className="mt-1 flex gap-2 text-side font-extrabold text-ink">
              <RiskMark step={3} className="mt-1 h-4 w-5 shrink-0" />
              {bound(caution.text)}
            </p>
          ))}
          {week.computing ? (
            <p className="mt-1 text-side text-ink2" role="status">
              A newer one is being computed: it appears here by itself.
            </p>
          ) : null}
          {staleNote}
        </>
      }
      aside={
        <div className="flex flex-wrap items-center gap-x-6 lg:block">
          <div>
            Computed <b className="text-ink">{formatAge(now - outlook.issuedAt)} ago</b>,{' '}
            {formatDateTime(outlook.issuedAt, site.timeZone)}
          </div>
          <div>
            Model <b className="text-ink">{formatAge(now - outlook.model.fittedAt)} old</b>,{' '}
            {formatNumber(outlook.model.weeksOfHistory)} weeks of history
          </div>
          {plan ? (
            <div>
              Plan version {plan.version}, saved <b className="text-ink">{formatAge(now - plan.savedAt)} ago</b> by{' '}
              {plan.savedBy}
            </div>
          ) : null}
          <div className="flex flex-wrap items-center gap-x-6 print:hidden">
            <label className="flex items-center gap-2">
              Show
              <select
                className="min-h-9.5 rounded-t-field border-0 border-b-2 border-edge bg-paper px-2 font-bold text-ink"
                value={days}
                onChange={(event) => onDays(Number(event.target.value))}
              >
                {dayChoices.map((choice) => (
                  <option key={choice} value={choice}>
                    {choice} days
                  </option>
                ))}
              </select>
            </label>
            <Menu label="CSV">
              <ul className="grid gap-1">
                {files.map((file) => (
                  <li key={file.fileName}>
                    <button
                      type="button"
                      className="link min-h-9 cursor-pointer text-left text-side whitespace-nowrap"
                      onClick={() => saveFile(file.fileName, 'text/csv;charset=utf-8', [file.text()])}
                    >
                      {file.title}
                    </button>
                  </li>
                ))}
              </ul>
            </Menu>
            <Button look="quiet" className="text-side" onClick={() => window.print()}>
              Print
            </Button>
            {links}
          </div>
          <div className="hidden font-bold text-ink print:block">
            {site.name}. A newer one is computed each day: do not use after{' '}
            {formatDateTime(outlook.issuedAt + 86_400, site.timeZone)}.
          </div>
        </div>
      }
    />
  );
}
