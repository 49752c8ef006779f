import { useState } from 'react';
import type { RememberedMapping } from '../../../shared/api/visit-log-mapping.ts';
import type { ExtractFactsInput } from '../../../shared/api/visit-logs.ts';
import {
  areaMeanings,
  arrivalMeanings,
  type AreaMeaning,
  type ArrivalMeaning,
} from '../../../shared/domain/extract-meaning.ts';
import type { VisitReport } from '../../../shared/domain/visit-report.ts';
import { Button } from '../../components/Button.tsx';
import { TextField } from '../../components/Field.tsx';
import { Notice } from '../../components/Notice.tsx';
import { formatCount, formatDateTime } from '../../lib/format.ts';
import { Choice } from './Choice.tsx';
import { areaMeaningWords, arrivalMeaningWords } from './log-words.ts';
import { fromLocalInput, toLocalInput } from './local-input.ts';

/** The answers so far. They stand outside the form, so that a send that fails or is cancelled keeps them. */
export interface AcceptAnswers {
  selectedBy: ExtractFactsInput['selectedBy'] | null;
  missing: ExtractFactsInput['missingDeparture'] | null;
  arrival: ArrivalMeaning | null;
  area: AreaMeaning | null;
  /** As typed, in the site's time; null while the first guess stands. */
  takenAt: string | null;
  goodOnly: boolean;
}

/** The answers that are offered for a new file: those of the site's last. */
export function offerAnswers(remembered: RememberedMapping | null): AcceptAnswers {
  return {
    selectedBy: remembered?.selectedBy ?? null,
    missing: remembered?.missingDeparture ?? null,
    arrival: remembered?.arrivalMeaning ?? null,
    area: remembered?.areaMeaning ?? null,
    takenAt: null,
    goodOnly: false,
  };
}

/** Fourth step: the three facts that decide how the rows are counted, and the word to load them. */
export function AcceptForm({
  report,
  timeZone,
  now,
  fileDate,
  remembered,
  answers,
  onAnswer,
  onAccept,
}: {
  report: VisitReport;
  timeZone: string;
  now: number;
  /** When the file was last changed, UTC seconds: the first guess for when the extract was taken. */
  fileDate: number;
  /** The answers of the site's last file; null before the first. */
  remembered: RememberedMapping | null;
  answers: AcceptAnswers;
  onAnswer: (changed: Partial<AcceptAnswers>) => void;
  onAccept: (facts: ExtractFactsInput, wasAskedMissing: boolean) => void;
}) {
  const last = report.lastTimeAt ?? 0;
  const { selectedBy, missing, arrival, area, goodOnly } = answers;
  const usesFileDate = fileDate >= last && fileDate <= now;
  const takenAt = answers.takenAt ?? toLocalInput(usesFileDate ? fileDate : last, timeZone);
  const [tried, setTried] = useState(false);

  const asksMissing = report.recorded.departure < report.goodRows;
  const taken = fromLocalInput(takenAt, timeZone);
  // The field has no seconds: the minute of the last time counts as its end.
  const takenFault =
    taken === null
      ? 'Enter a date and a time.'
      : taken + 59 < last
        ? `Not before the last time in the file, ${formatDateTime(last, timeZone)}.`
        : taken > now + 300
          ? 'Not in the future.'
          : undefined;
  const faults = {
    selectedBy: selectedBy === null ? 'Choose one.' : undefined,
    arrival: arrival === null ? 'Choose one.' : undefined,
    area: area === null ? 'Choose one.' : undefined,
    missing: asksMissing && missing === null ? 'Choose one.' : undefined,
    goodOnly: report.problemRows > 0 && !goodOnly ? 'Tick this, or correct the file and choose it again.' : undefined,
  };

  return (
    <form
      className="grid max-w-[58rem] gap-6"
      aria-label="About the extract"
      noValidate
      onSubmit={(event) => {
        event.preventDefault();
        setTried(true);
        if (takenFault ?? faults.missing ?? faults.goodOnly) return;
        if (selectedBy === null || arrival === null || area === null || taken === null) return;
        onAccept(
          {
            selectedBy,
            takenAt: Math.max(taken, last),
            missingDeparture: (asksMissing ? missing : null) ?? 'unknown',
            arrivalMeaning: arrival,
            areaMeaning: area,
          },
          asksMissing,
        );
      }}
    >
      {remembered ? (
        <Notice title="Answered as for the last file of this site.">
          <p>Change what is different for this one.</p>
        </Notice>
      ) : null}
      <Choice
        legend="Which visits does the extract hold?"
        name="selected-by"
        chosen={selectedBy}
        error={tried ? faults.selectedBy : undefined}
        options={[
          { value: 'arrived', label: 'Those that arrived in its period' },
          { value: 'departed', label: 'Those that departed in its period: long stays at its end are then missing' },
        ]}
        onChoose={(value) => {
          onAnswer({ selectedBy: value });
        }}
      />
      <Choice
        legend="What does the arrival time mark, for patients who come by ambulance?"
        hint={changed(remembered?.arrivalMeaning, arrival, arrivalMeaningWords)}
        name="arrival-meaning"
        chosen={arrival}
        error={tried ? faults.arrival : undefined}
        options={arrivalMeanings.map((value) => ({ value, label: arrivalMeaningWords[value] }))}
        onChoose={(value) => {
          onAnswer({ arrival: value });
        }}
      />
      <Choice
        legend="Which care area does a row name, if the patient moved between areas?"
        hint={changed(remembered?.areaMeaning, area, areaMeaningWords)}
        name="area-meaning"
        chosen={area}
        error={tried ? faults.area : undefined}
        options={areaMeanings.map((value) => ({ value, label: areaMeaningWords[value] }))}
        onChoose={(value) => {
          onAnswer({ area: value });
        }}
      />
      <div className="max-w-80">
        <TextField
          label="When was the extract taken?"
          hint={
            <>
              In the site’s time. Filled in{' '}
              {usesFileDate ? 'from the file’s own date' : 'with the last time in the file'}: correct it if that is not
              right.
              {taken === null ? null : (
                <>
                  {' '}
                  Read as <b className="text-ink">{formatDateTime(taken, timeZone)}</b>.
                </>
              )}
            </>
          }
          type="datetime-local"
          value={takenAt}
          error={tried ? takenFault : undefined}
          onChange={(event) => {
            onAnswer({ takenAt: event.target.value });
          }}
        />
      </div>
      {asksMissing ? (
        <Choice
          legend={`What does a missing departure mean (${formatCount(report.goodRows - report.recorded.departure, 'row')})?`}
          name="missing-departure"
          chosen={missing}
          error={tried ? faults.missing : undefined}
          options={[
            { value: 'still present', label: 'The patient was still present when the extract was taken' },
            { value: 'unknown', label: 'It is unknown when the patient left' },
          ]}
          onChoose={(value) => {
            onAnswer({ missing: value });
          }}
        />
      ) : null}
      {report.problemRows > 0 ? (
        <div className="grid gap-1">
          <label className="flex min-h-11 items-center gap-3 font-bold text-ink">
            <input
              type="checkbox"
              className="size-5 shrink-0 accent-act"
              checked={goodOnly}
              onChange={(event) => {
                onAnswer({ goodOnly: event.target.checked });
              }}
            />
            Load the {formatCount(report.goodRows, 'good row')} and leave out{' '}
            {formatCount(report.problemRows, 'problem row')}
          </label>
          {tried && faults.goodOnly ? (
            <p role="alert" className="text-quiet font-bold text-warn">
              {faults.goodOnly}
            </p>
          ) : null}
        </div>
      ) : null}
      <Button type="submit" className="justify-self-start">
        Send and load {formatCount(report.goodRows, 'visit')}
      </Button>
    </form>
  );
}

/** Says so where an answer differs from the last file's: the counts of the two cannot be compared as they are. */
function changed<Value extends string>(
  before: Value | null | undefined,
  now: Value | null,
  words: Record<Value, string>,
): string | undefined {
  if (!before || before === now) return undefined;
  return `The last file said: ${words[before]}. Logs that differ in this do not compare; fit on those of one kind.`;
}
