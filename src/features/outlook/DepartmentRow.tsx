import { useId } from 'react';
import type { Outlook, Tonight } from '../../../shared/api/outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { NeedStrip } from '../../../shared/charts/NeedStrip.tsx';
import { bedsAt } from '../../../shared/domain/bed-schedule.ts';
import { formatChance, riskWord } from '../../../shared/domain/risk-word.ts';
import { formatNumber, formatSigned, formatTime } from '../../lib/format.ts';
import { FigureCaptions, SomeTimeLine } from './AreaGutter.tsx';
import type { Rights } from './AreaGutter.tsx';
import { BoardRow } from '../../components/BoardRow.tsx';
import { ChanceTable } from '../../components/ChanceTable.tsx';
import { ReadNeed } from '../../components/ReadNeed.tsx';
import { DepartmentFields } from './DepartmentFields.tsx';
import { pastHours } from './tonight-board.ts';
import type { Board } from './tonight-board.ts';
import { useCensusEntryContext } from './use-census-entry.ts';

/** How the arrivals so far compare with what was expected, and what that does to the forecast; quieter or busier only outside the 80 % range. */
export function arrivalsInWords(soFar: NonNullable<Outlook['result']['arrivalsSoFar']>): string {
  const spread =
    soFar.counted < soFar.p10
      ? 'quieter than usual'
      : soFar.counted > soFar.p90
        ? 'busier than usual'
        : 'within the usual spread';
  const said = `${formatNumber(soFar.counted)} arrivals so far, ${formatNumber(soFar.expected)} expected: ${spread}`;
  if (soFar.move === undefined) return `${said}.`;
  const percent = Math.round((soFar.move - 1) * 100);
  return percent === 0
    ? `${said}; tonight’s forecast stays as it was.`
    : `${said}; tonight’s forecast moves ${percent > 0 ? 'up' : 'down'} ${String(Math.abs(percent))}\u00a0%.`;
}

/** The whole department: its totals, the chance that some area is short, and the pooled need beneath it. */
export function DepartmentRow({
  board,
  outlook,
  tonight,
  site,
  rights,
  columnWidth,
  hiddenColumns,
  hourNames,
  then,
}: {
  board: Board;
  outlook: Outlook;
  tonight: Tonight;
  site: Site;
  rights: Rights;
  columnWidth: number;
  hiddenColumns: number;
  hourNames: readonly string[];
  /** The board is that of an earlier time. */
  then: boolean;
}) {
  const { department } = board;
  const { census, nothingChanged, saving } = useCensusEntryContext();
  const id = useId();
  const counts = census?.areas ?? [];
  const total = (field: 'present' | 'waiting' | 'boarding') => counts.reduce((sum, area) => sum + area[field], 0);
  const uncounted = board.areas.filter((row) => !row.counted).map((row) => row.area.name);
  const staffedNow = department.staffed.length > 0 ? bedsAt(department.staffed, tonight.now) : 0;
  const peak = Math.max(0, ...department.someAreaShort.map((cell) => cell.chance));
  const peakAt = department.someAreaShort.findIndex((cell) => cell.chance === peak);
  const soFar = outlook.result.arrivalsSoFar;
  const figures = (label: string, short: string, values: readonly number[], spoken: string) => ({
    kind: 'figures' as const,
    label,
    short,
    figures: values.map((value, index) => ({
      text: formatNumber(value, 1),
      spoken: `${formatNumber(value, 1)} ${spoken}, the hour to ${hourNames[index]}`,
    })),
  });
  const summary =
    `Chance that some area is short: highest ${formatChance(peak)}, ${riskWord(peak)}, at ${hourNames[peakAt] ?? 'no hour'}.` +
    (department.counted ? '' : ' Areas that are not counted stand in it as the model expects them.');

  return (
    <BoardRow
      ruled={false}
      gutter={
        <div className="grid gap-2">
          <div>
            <h2 className="text-section">Whole department</h2>
            {department.someTime && counts.length > 0 ? (
              <SomeTimeLine
                someTime={department.someTime}
                timeZone={site.timeZone}
                subject="that some area is short "
                inNights
              />
            ) : null}
            {uncounted.length > 0 && counts.length > 0 ? (
              <p className="text-label font-bold text-ink2 tight">
                Not counted: {uncounted.join(', ')}. Expected in the drawing as the model has it; not in the figures
                below.
              </p>
            ) : null}
            {soFar ? <p className="text-label text-ink2 tight">{arrivalsInWords(soFar)}</p> : null}
          </div>
          {rights.enterCensus ? (
            <div className="flex items-end justify-between gap-2">
              <DepartmentFields fields={[{ field: 'arrivalsSinceMidnight', label: 'Arrivals since midnight' }]} />
              {counts.length > 0 ? (
                <button
                  type="button"
                  aria-disabled={saving || undefined}
                  onClick={nothingChanged}
                  className="hidden h-9.5 cursor-pointer rounded-button border-2 border-act px-1.5 text-small leading-none font-extrabold text-act tight hover:bg-act-soft lg:block print:hidden"
                >
                  {saving ? 'Saving…' : 'Nothing changed'}
                </button>
              ) : null}
            </div>
          ) : null}
          <div>
            <FigureCaptions />
            <dl className="grid grid-cols-4 gap-1.5 text-center text-section [font-weight:850]">
              {(['present', 'waiting', 'boarding'] as const).map((field) => (
                <div key={field}>
                  <dt className="sr-only">Whole department, {field}</dt>
                  <dd>{counts.length > 0 ? total(field) : '–'}</dd>
                </div>
              ))}
              <div>
                <dt className="sr-only">Whole department, staffed beds now</dt>
                <dd>{staffedNow}</dd>
              </div>
            </dl>
          </div>
        </div>
      }
      strip={
        <div className="pt-5">
          <p className="sr-only">{summary}</p>
          <ReadNeed
            label="Whole department, need by hour"
            columns={department.columns}
            names={hourNames}
            columnWidth={columnWidth}
            timeZone={site.timeZone}
          >
            <NeedStrip
              id={id}
              columns={department.columns}
              staffed={department.staffed}
              columnWidth={columnWidth}
              height={128}
              tall
              counted={counts.length > 0}
              presentNow={counts.length > 0 ? total('present') : null}
              then={then}
              namePercentiles
            />
          </ReadNeed>
          <ChanceTable
            caption="Whole department, hour by hour"
            hourNames={hourNames}
            pastColumns={pastHours}
            hiddenColumns={hiddenColumns}
            columnWidth={columnWidth}
            rows={[
              {
                kind: 'chance',
                label: 'Some area short',
                short: 'Some short',
                chances: department.someAreaShort,
                limit: null,
                counted: counts.length > 0,
                words: true,
              },
              {
                kind: 'figures',
                label: 'If beds were pooled',
                short: 'If pooled',
                figures: department.pooled.map(({ chance }, index) => ({
                  text: formatChance(chance).replace(' ', ''),
                  spoken: `${formatChance(chance)} if every bed could take any patient, ${hourNames[index]}`,
                })),
              },
              {
                kind: 'figures',
                label: 'Headroom, pooled',
                short: 'Headroom',
                figures: department.headroom.map((beds, index) => ({
                  text: formatSigned(beds),
                  spoken: `headroom ${formatSigned(beds)} if every bed could take any patient, ${hourNames[index]}`,
                  strong: beds < 0,
                })),
              },
              // Hourly counts say nothing of dispositions: no admissions are better than noughts.
              ...(tonight.outlook?.model.staysFrom
                ? []
                : [
                    figures(
                      'Admitted, leaving',
                      'Leaving',
                      department.admittedLeaving,
                      'admitted patients expected to leave',
                    ),
                    figures(
                      'Arrivals to admit',
                      'To admit',
                      department.arrivalsToAdmit,
                      'arrivals expected to need admission',
                    ),
                  ]),
            ]}
          />
          {tonight.outlook ? (
            <p className="sr-only">Outlook issued at {formatTime(outlook.issuedAt, site.timeZone)}.</p>
          ) : null}
        </div>
      }
    />
  );
}
