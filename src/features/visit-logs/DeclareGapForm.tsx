import { useState } from 'react';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { Button } from '../../components/Button.tsx';
import { SelectField, TextArea, TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { Choice } from './Choice.tsx';
import { useDeclareGap } from './exposure-gap-queries.ts';
import { fromLocalInput } from './local-input.ts';
import type { AreaName } from './mapping.ts';

const everywhere = '';

/** What happened, where, from when until when, and why. */
export function DeclareGapForm({
  siteId,
  areas,
  timeZone,
  onDone,
}: {
  siteId: string;
  areas: readonly AreaName[];
  timeZone: string;
  onDone: () => void;
}) {
  const [kind, setKind] = useState<'outage' | 'diversion' | null>(null);
  const [area, setArea] = useState(everywhere);
  const [fromText, setFrom] = useState('');
  const [untilText, setUntil] = useState('');
  const [reason, setReason] = useState('');
  const [tried, setTried] = useState(false);
  const declare = useDeclareGap(siteId);

  const from = fromLocalInput(fromText, timeZone);
  const until = fromLocalInput(untilText, timeZone);
  const identifier = screenNote(reason);
  const faults = {
    kind: kind === null ? 'Choose one.' : undefined,
    from: from === null ? 'Enter a date and a time.' : undefined,
    until:
      until === null
        ? 'Enter a date and a time.'
        : from !== null && until <= from
          ? 'The end must lie after the start.'
          : undefined,
    reason:
      identifier !== null
        ? `This looks as if it held ${withArticle(identifier)}. Leave out anything that could identify a person.`
        : reason.trim().length < 3
          ? 'Say why, in a few words.'
          : undefined,
  };

  return (
    <form
      className="grid gap-4"
      noValidate
      onSubmit={(event) => {
        event.preventDefault();
        setTried(true);
        if (faults.until ?? faults.reason) return;
        if (kind === null || from === null || until === null) return;
        const areaId = area === everywhere ? null : area;
        declare.mutate({ kind, areaId, from, until, reason: reason.trim() }, { onSuccess: onDone });
      }}
    >
      <Choice
        legend="What happened?"
        name="gap-kind"
        chosen={kind}
        error={tried ? faults.kind : undefined}
        options={[
          { value: 'outage', label: 'Outage: visits were not recorded' },
          { value: 'diversion', label: 'Diversion: patients were sent elsewhere' },
        ]}
        onChoose={setKind}
      />
      <SelectField
        label="Where"
        value={area}
        onChange={(event) => {
          setArea(event.target.value);
        }}
        options={[
          { value: everywhere, label: 'Whole department' },
          ...areas.map(({ id, name }) => ({ value: id, label: name })),
        ]}
      />
      <div className="grid gap-4 sm:grid-cols-2">
        <TextField
          label="From"
          hint="In the site’s time."
          type="datetime-local"
          value={fromText}
          error={tried ? faults.from : undefined}
          onChange={(event) => {
            setFrom(event.target.value);
          }}
        />
        <TextField
          label="Until"
          hint="In the site’s time."
          type="datetime-local"
          value={untilText}
          error={tried ? faults.until : undefined}
          onChange={(event) => {
            setUntil(event.target.value);
          }}
        />
      </div>
      <TextArea
        label="Reason"
        hint="Shown in the list. No patient details."
        maxLength={500}
        value={reason}
        error={tried || identifier !== null ? faults.reason : undefined}
        onChange={(event) => {
          setReason(event.target.value);
        }}
      />
      {declare.error ? <ProblemNotice error={declare.error} /> : null}
      <Button type="submit" className="justify-self-start" busy={declare.isPending} busyText="Declaring…">
        Declare it
      </Button>
    </form>
  );
}
