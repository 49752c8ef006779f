import { Button } from '../../components/Button.tsx';
import { Notice } from '../../components/Notice.tsx';
import { formatCount, formatDate, formatNumber } from '../../lib/format.ts';
import { Choice } from './Choice.tsx';
import { asksCountOrder, countFaults, emptyCounts, offerCounts } from './count-mapping.ts';
import { DateOrderQuestion } from './DateOrderQuestion.tsx';
import { MapColumns } from './MapColumns.tsx';
import { MapCounts } from './MapCounts.tsx';
import { MapValues } from './MapValues.tsx';
import { ambiguousColumns, mappingFaults, remap, stateOrder, type AreaName } from './mapping.ts';
import { findNews, type LastMapping, type News } from './remember-mapping.ts';
import type { FileSurvey } from './survey-file.ts';
import type { useUploadWalk, Walk } from './use-upload-walk.ts';

/** Second step: columns, the order of day and month, values. */
export function MapStep({
  walk,
  areas,
  last,
  timeZone,
  act,
}: {
  walk: Extract<Walk, { step: 'map' }>;
  areas: readonly AreaName[];
  last: LastMapping | null;
  timeZone: string;
  act: Pick<ReturnType<typeof useUploadWalk>, 'setMapping' | 'check' | 'back'>;
}) {
  const { survey, mapping, refused } = walk;
  const counts = mapping.counts ?? null;
  const faults = counts ? countFaults(survey, counts) : mappingFaults(survey, mapping);
  const asksOrder = counts ? asksCountOrder(survey, counts) : ambiguousColumns(survey, mapping).length > 0;
  const news = findNews(survey, mapping, last?.mapping ?? null);
  const unanswered = asksOrder && (counts ?? mapping).statedOrder === null;
  return (
    <>
      {refused.length > 0 ? (
        <Notice kind="caution" live title="The file cannot be taken as it is. Nothing was sent.">
          <ul className="mt-1 list-disc pl-5">
            {refused.map((fault) => (
              <li key={`${fault.at} ${fault.message}`}>
                <b className="text-ink">{fault.at}: </b>
                {fault.message}
              </li>
            ))}
          </ul>
        </Notice>
      ) : null}
      <SourceNotice survey={survey} />
      <Choice
        legend="What is one row of the file?"
        name="row-holds"
        chosen={counts ? 'hour' : 'visit'}
        error={undefined}
        options={[
          { value: 'visit', label: 'A visit, with its times' },
          { value: 'hour', label: 'An hour of a care area, with how many came (hourly counts)' },
        ]}
        onChoose={(holds) => {
          const offered = holds === 'hour' ? (offerCounts(survey, areas) ?? emptyCounts()) : null;
          act.setMapping({ ...mapping, counts: offered });
        }}
      />
      {counts ? (
        <MapCounts
          survey={survey}
          mapping={counts}
          areas={areas}
          onChange={(changed) => {
            act.setMapping({ ...mapping, counts: changed });
          }}
        />
      ) : (
        <>
          {last ? <LastTime last={last} news={news} timeZone={timeZone} /> : null}
          <MapColumns
            survey={survey}
            mapping={mapping}
            onMap={(ours, index) => {
              act.setMapping(remap(survey, mapping, ours, index, areas, last?.mapping ?? null));
            }}
          />
          {asksOrder ? (
            <DateOrderQuestion
              order={mapping.statedOrder}
              onState={(order) => {
                act.setMapping(stateOrder(survey, mapping, order));
              }}
            />
          ) : null}
          <MapValues survey={survey} mapping={mapping} areas={areas} news={news.values} onChange={act.setMapping} />
        </>
      )}
      {faults.length > 0 ? (
        <Notice kind="caution" title="Before the rows can be checked">
          <ul className="mt-1 list-disc pl-5">
            {faults.map((fault) => (
              <li key={fault}>{fault}</li>
            ))}
          </ul>
        </Notice>
      ) : null}
      <div className="flex flex-wrap items-center gap-6">
        <Button
          disabled={faults.length > 0 || unanswered}
          onClick={() => {
            act.check(walk, mapping);
          }}
        >
          Check {formatCount(survey.rows, 'row')}
        </Button>
        <Button look="quiet" onClick={act.back}>
          Choose another file
        </Button>
        {unanswered ? <span className="text-ink2">First say which comes first, day or month.</span> : null}
      </div>
    </>
  );
}

/** What of the file was not read as rows. */
function SourceNotice({ survey: { facts } }: { survey: FileSurvey }) {
  const { sheet, encounters } = facts;
  if (sheet !== null && sheet.otherSheets > 0) {
    return (
      <Notice title={`Only the first sheet, “${sheet.sheetName}”, was read.`}>
        <p>
          The workbook has {formatCount(sheet.otherSheets, 'other sheet')}. Save the one with the visits first if this
          is not it.
        </p>
      </Notice>
    );
  }
  if (encounters !== null && encounters.otherClass + encounters.notHappened > 0) {
    return (
      <Notice
        kind={encounters.onceEmergency > 0 ? 'caution' : 'note'}
        title={`${formatCount(encounters.otherClass + encounters.notHappened, 'Encounter is', 'Encounters are')} left out here.`}
      >
        <p>
          Of {formatCount(encounters.encounters, 'Encounter')}, {formatNumber(encounters.otherClass)} have another class
          than EMER and {formatNumber(encounters.notHappened)} are planned, cancelled or entered in error.
          {encounters.onceEmergency > 0
            ? ` ${formatNumber(encounters.onceEmergency)} of them were of class EMER earlier: admitted patients whose encounter changed its class. Without them the log misses admissions; export the emergency part of such an encounter as one of its own.`
            : ''}
        </p>
      </Notice>
    );
  }
  return null;
}

/** Whose answers are offered, and what of this file they do not cover. */
function LastTime({ last, news, timeZone }: { last: LastMapping; news: News; timeZone: string }) {
  const words = Object.values(news.values).flatMap((values) => [...values]);
  const from = `It was accepted ${formatDate(last.savedAt, timeZone)} by ${last.savedBy}.`;
  if (news.columns.length + words.length === 0) {
    return (
      <Notice title="Mapped as the last file was; nothing in this one is new.">
        <p>{from}</p>
      </Notice>
    );
  }
  return (
    <Notice kind="caution" title="Mapped as the last file was. Look at what is new.">
      <ul className="mt-1 list-disc pl-5">
        {news.columns.map((sentence) => (
          <li key={sentence}>{sentence}</li>
        ))}
        {words.length > 0 ? (
          <li>
            {formatCount(words.length, 'value is', 'values are')} new: {words.slice(0, 12).join(', ')}
            {words.length > 12 ? ' and others, first in the tables below' : ''}.
          </li>
        ) : null}
      </ul>
      <p>{from}</p>
    </Notice>
  );
}
