import { useState } from 'react';
import type { ExtractFactsInput } from '../../../shared/api/visit-logs.ts';
import type { VisitReport } from '../../../shared/domain/visit-report.ts';
import { Button } from '../../components/Button.tsx';
import { TextField } from '../../components/Field.tsx';
import { formatCount, formatDateTime } from '../../lib/format.ts';
import { fromLocalInput, toLocalInput } from './local-input.ts';

/** Fourth step: the three facts that decide how the rows are counted, and the word to load them. */
export function AcceptForm({
  report,
  timeZone,
  now,
  fileDate,
  onAccept,
}: {
  report: VisitReport;
  timeZone: string;
  now: number;
  /** When the file was last changed, UTC seconds: the first guess for when the extract was taken. */
  fileDate: number;
  onAccept: (facts: ExtractFactsInput) => void;
}) {
  const last = report.lastTimeAt ?? 0;
  const [selectedBy, setSelectedBy] = useState<ExtractFactsInput['selectedBy'] | null>(null);
  const [missing, setMissing] = useState<ExtractFactsInput['missingDeparture'] | null>(null);
  const usesFileDate = fileDate >= last && fileDate <= now;
  const [takenAt, setTakenAt] = useState(() => toLocalInput(usesFileDate ? fileDate : last, timeZone));
  const [goodOnly, setGoodOnly] = useState(false);
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
    missing: asksMissing && missing === null ? 'Choose one.' : undefined,
    goodOnly: report.problemRows > 0 && !goodOnly ? 'Tick this, or correct the file and choose it again.' : undefined,
  };

  return (
    <form
      className="grid max-w-[58rem] gap-6"
      noValidate
      onSubmit={(event) => {
        event.preventDefault();
        setTried(true);
        if (takenFault ?? faults.selectedBy ?? faults.missing ?? faults.goodOnly) return;
        if (selectedBy === null || taken === null) return;
        onAccept({ selectedBy, takenAt: Math.max(taken, last), missingDeparture: missing ?? 'unknown' });
      }}
    >
      <Choice
        legend="Which visits does the extract hold?"
        name="selected-by"
        chosen={selectedBy}
        error={tried ? faults.selectedBy : undefined}
        options={[
          { value: 'arrived', label: 'Those that arrived in its period' },
          { value: 'departed', label: 'Those that departed in its period: long stays at its end are then missing' },
        ]}
        onChoose={setSelectedBy}
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
            setTakenAt(event.target.value);
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
          onChoose={setMissing}
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
                setGoodOnly(event.target.checked);
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

function Choice<Value extends string>({
  legend,
  name,
  options,
  chosen,
  error,
  onChoose,
}: {
  legend: string;
  name: string;
  options: readonly { value: Value; label: string }[];
  chosen: Value | null;
  error: string | undefined;
  onChoose: (value: Value) => void;
}) {
  return (
    <fieldset aria-invalid={error ? true : undefined}>
      <legend className="font-bold text-ink">{legend}</legend>
      {options.map((option) => (
        <label key={option.value} className="flex min-h-11 items-center gap-3">
          <input
            type="radio"
            name={name}
            className="size-5 shrink-0 accent-act"
            checked={chosen === option.value}
            onChange={() => {
              onChoose(option.value);
            }}
          />
          {option.label}
        </label>
      ))}
      {error ? (
        <p role="alert" className="text-quiet font-bold text-warn">
          {error}
        </p>
      ) : null}
    </fieldset>
  );
}
