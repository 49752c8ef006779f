import { useState } from 'react';
import type { BriefSettings } from '../../../shared/api/briefs.ts';
import { Button } from '../../components/Button.tsx';
import { SelectField, TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatDateTime, weekdayName } from '../../lib/format.ts';
import { useUnsavedWork } from '../../lib/unsaved-work.ts';

const two = (value: number) => String(value).padStart(2, '0');
const timeOf = (minute: number) => `${two(Math.floor(minute / 60))}:${two(minute % 60)}`;

/** When the brief goes out, whether it waits for approval, and what it covers. */
export function ScheduleForm({
  settings,
  nextDueAt,
  mayCoverGroup,
  groupName,
  timeZone,
  saving,
  error,
  onSave,
}: {
  settings: BriefSettings;
  nextDueAt: number | null;
  mayCoverGroup: boolean;
  groupName: string;
  timeZone: string;
  saving: boolean;
  error: unknown;
  /** Calls `done` once it is saved. */
  onSave: (settings: BriefSettings, done: () => void) => void;
}) {
  const [draft, setDraft] = useState<BriefSettings | null>(null);
  const [time, setTime] = useState<string | null>(null);
  const shown = draft ?? settings;
  const change = (more: Partial<BriefSettings>) => setDraft({ ...shown, ...more });
  const typed = time ?? timeOf(shown.minuteOfDay);
  const match = /^([01]\d|2[0-3]):([0-5]\d)$/.exec(typed);
  const minute = match ? Number(match[1]) * 60 + Number(match[2]) : null;
  const fault =
    minute === null ? 'A time of day, such as 07:00.' : minute % 15 !== 0 ? 'At a full quarter of an hour.' : undefined;
  const changed = draft !== null || time !== null;
  useUnsavedWork(changed, 'a schedule of the brief that is not saved');
  return (
    <form
      className="grid max-w-xl gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        if (fault !== undefined || minute === null) return;
        onSave({ ...shown, minuteOfDay: minute }, () => {
          setDraft(null);
          setTime(null);
        });
      }}
    >
      <p className="text-ink2">
        {settings.scheduled && nextDueAt !== null
          ? `The next brief is due ${formatDateTime(nextDueAt, timeZone)}, by the time of the site.`
          : 'No brief goes out by itself.'}
      </p>
      <SelectField
        label="Goes out by itself"
        value={shown.scheduled ? 'yes' : 'no'}
        onChange={(event) => change({ scheduled: event.target.value === 'yes' })}
        options={[
          { value: 'no', label: 'No' },
          { value: 'yes', label: 'Once a week' },
        ]}
      />
      <div className="grid gap-4 sm:grid-cols-2">
        <SelectField
          label="Day"
          hint="Of the week."
          value={String(shown.weekday)}
          onChange={(event) => change({ weekday: Number(event.target.value) })}
          options={[1, 2, 3, 4, 5, 6, 7].map((day) => ({ value: String(day), label: weekdayName(day) }))}
        />
        <TextField
          label="Hour"
          hint="By the time of the site, 24 h."
          inputMode="numeric"
          maxLength={5}
          value={typed}
          error={changed ? fault : undefined}
          onChange={(event) => setTime(event.target.value)}
        />
      </div>
      <SelectField
        label="Before it is sent"
        hint="A brief that waits for approval is sent by a press on its page."
        value={shown.approveFirst ? 'approve' : 'send'}
        onChange={(event) => change({ approveFirst: event.target.value === 'approve' })}
        options={[
          { value: 'approve', label: 'Somebody approves it' },
          { value: 'send', label: 'It is sent at once' },
        ]}
      />
      <SelectField
        label="Tells of"
        value={shown.covers}
        onChange={(event) => change({ covers: event.target.value === 'group' ? 'group' : 'site' })}
        options={[
          { value: 'site', label: 'This site' },
          {
            value: 'group',
            label: `Every site of ${groupName}${mayCoverGroup ? '' : ' (needs your role at each of them)'}`,
            disabled: !mayCoverGroup,
          },
        ]}
      />
      {error ? <ProblemNotice error={error} /> : null}
      <div className="flex flex-wrap gap-3">
        <Button type="submit" busy={saving} busyText="Saving…" disabled={!changed}>
          Save the schedule
        </Button>
        {changed ? (
          <Button
            look="quiet"
            onClick={() => {
              setDraft(null);
              setTime(null);
            }}
          >
            Leave it as it was
          </Button>
        ) : null}
      </div>
    </form>
  );
}
