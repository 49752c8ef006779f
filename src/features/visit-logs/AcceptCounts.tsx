import { useState } from 'react';
import { longestStatedMean, type ExtractFactsInput, type StatedStaysInput } from '../../../shared/api/visit-logs.ts';
import { arrivalMeanings, type ArrivalMeaning } from '../../../shared/domain/extract-meaning.ts';
import type { CountedFile } from '../../../shared/domain/hourly-count.ts';
import { Button } from '../../components/Button.tsx';
import { TextField } from '../../components/Field.tsx';
import { formatCount, formatDateTime } from '../../lib/format.ts';
import { Choice } from './Choice.tsx';
import { fromLocalInput, toLocalInput } from './local-input.ts';
import { arrivalMeaningWords } from './log-words.ts';
import type { AreaName } from './mapping.ts';

/** The answers so far, kept outside the form so that a send that fails keeps them. */
export interface CountAnswers {
  arrival: ArrivalMeaning | null;
  takenAt: string | null;
  /** Mean stays as typed, by area number. */
  means: Record<number, string>;
  source: string;
}

export const noCountAnswers: CountAnswers = { arrival: null, takenAt: null, means: {}, source: '' };

/** Fourth step for hourly counts: what is asked about them, and the mean stays that counts do not tell. */
export function AcceptCounts({
  counted,
  areas,
  end,
  rows,
  timeZone,
  now,
  answers,
  onAnswer,
  onAccept,
}: {
  counted: CountedFile;
  areas: readonly AreaName[];
  /** End of the last hour, UTC seconds. */
  end: number;
  rows: number;
  timeZone: string;
  now: number;
  answers: CountAnswers;
  onAnswer: (changed: Partial<CountAnswers>) => void;
  onAccept: (facts: ExtractFactsInput, stated: StatedStaysInput) => void;
}) {
  const [tried, setTried] = useState(false);
  const { arrival, means, source } = answers;
  const asked = counted.areas.filter(({ arrivals }) => arrivals > 0).map(({ area }) => area);
  const takenAt = answers.takenAt ?? toLocalInput(end, timeZone);
  const taken = fromLocalInput(takenAt, timeZone);
  const takenFault =
    taken === null
      ? 'Enter a date and a time.'
      : taken < end
        ? `Not before the end of the last hour, ${formatDateTime(end, timeZone)}.`
        : taken > now + 300
          ? 'Not in the future.'
          : undefined;
  const meanOf = (area: number) => Number((means[area] ?? '').replace(',', '.'));
  const meanFault = (area: number) =>
    meanOf(area) >= 0.1 && meanOf(area) <= longestStatedMean
      ? undefined
      : `Enter hours from 0.1 to ${String(longestStatedMean)}, for instance 3.5.`;
  const sourceFault = source.trim().length >= 3 ? undefined : 'Say where the figures are from.';
  return (
    <form
      className="grid max-w-[58rem] gap-6"
      aria-label="About the counts"
      noValidate
      onSubmit={(event) => {
        event.preventDefault();
        setTried(true);
        if (arrival === null || taken === null || takenFault) return;
        if (sourceFault ?? asked.map(meanFault).find((fault) => fault !== undefined)) return;
        onAccept(
          {
            selectedBy: 'arrived',
            takenAt: taken,
            missingDeparture: 'unknown',
            arrivalMeaning: arrival,
            areaMeaning: null,
          },
          {
            source: source.trim(),
            areas: asked.map((area) => ({ areaId: areas[area].id, meanHours: meanOf(area) })),
          },
        );
      }}
    >
      <Choice
        legend="At what moment is a patient who comes by ambulance counted as arrived?"
        name="arrival-meaning"
        chosen={arrival}
        error={tried && arrival === null ? 'Choose one.' : undefined}
        options={arrivalMeanings.map((value) => ({ value, label: arrivalMeaningWords[value] }))}
        onChoose={(value) => {
          onAnswer({ arrival: value });
        }}
      />
      <div className="max-w-80">
        <TextField
          label="When was the extract taken?"
          hint="In the site’s time. Filled in with the end of the last hour: correct it if that is not right."
          type="datetime-local"
          value={takenAt}
          error={tried ? takenFault : undefined}
          onChange={(event) => {
            onAnswer({ takenAt: event.target.value });
          }}
        />
      </div>
      <fieldset className="grid gap-4">
        <legend className="font-bold text-ink">How long do patients stay, on average?</legend>
        <p className="text-ink2">
          Counts do not tell it, with departures or without: how many were there when they begin is not in them. The
          figures are taken as right within 20 % and shown as stated, not measured, wherever they are used.
        </p>
        <div className="grid gap-4 sm:grid-cols-2">
          {asked.map((area) => (
            <TextField
              key={area}
              label={`Mean stay in ${areas[area]?.name ?? ''}, hours`}
              inputMode="decimal"
              value={means[area] ?? ''}
              error={tried ? meanFault(area) : undefined}
              onChange={(event) => {
                onAnswer({ means: { ...means, [area]: event.target.value } });
              }}
            />
          ))}
        </div>
        <TextField
          label="Where are the figures from?"
          hint="For instance: the department’s annual report for 2025."
          maxLength={200}
          value={source}
          error={tried ? sourceFault : undefined}
          onChange={(event) => {
            onAnswer({ source: event.target.value });
          }}
        />
      </fieldset>
      <Button type="submit" className="justify-self-start">
        Send and load {formatCount(rows, 'row')}
      </Button>
    </form>
  );
}
