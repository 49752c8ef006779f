import { useState } from 'react';
import { instantOfLocal, type ShiftTime } from '../../../shared/domain/shift-times.ts';
import { dayAndTime } from '../../../shared/domain/plan-change.ts';
import type { Zone } from '../../../shared/domain/zoned-time.ts';
import { SelectField } from '../../components/Field.tsx';
import { formatDay } from '../../lib/format.ts';

const day = 86_400;
const two = (value: number) => String(value).padStart(2, '0');
const halfHours = Array.from({ length: 48 }, (_, i) => ({
  value: String(i * 1800),
  label: `${two(Math.floor(i / 2))}:${i % 2 === 0 ? '00' : '30'}`,
}));

/** What the times of a plan lie within. */
export interface TimeFrame {
  zone: Zone;
  timeZone: string;
  from: number;
  to: number;
  spans: readonly ShiftTime[];
}

/** A full or half hour within the week: its day and its time. */
export function InstantField({
  label,
  value,
  frame,
  error,
  onChange,
}: {
  label: string;
  value: number;
  frame: TimeFrame;
  error?: string | undefined;
  onChange: (at: number) => void;
}) {
  const { zone, timeZone, from, to } = frame;
  const local = zone.toLocal(value);
  const dayOf = (seconds: number) => Math.floor(seconds / day) * day;
  const first = dayOf(zone.toLocal(from));
  const last = dayOf(zone.toLocal(to));
  const days = Array.from({ length: Math.round((last - first) / day) + 1 }, (_, i) => first + i * day);
  const chosen = dayOf(local);
  // The day that a change begins on may have passed by the time that it is looked at.
  const offered = days.includes(chosen) ? days : [chosen, ...days];
  const choose = (localDay: number, secondOfDay: number) => onChange(instantOfLocal(zone, localDay + secondOfDay));
  return (
    <div className="grid grid-cols-[minmax(0,3fr)_minmax(0,2fr)] items-end gap-2">
      <SelectField
        label={`${label}, day`}
        value={String(chosen)}
        options={offered.map((localDay) => ({
          value: String(localDay),
          label: formatDay(instantOfLocal(zone, localDay + day / 2), timeZone, 'short'),
        }))}
        error={error}
        onChange={(event) => choose(Number(event.target.value), local - chosen)}
      />
      <SelectField
        label="time"
        aria-label={`${label}, time`}
        value={String(local - chosen)}
        options={halfHours}
        onChange={(event) => choose(chosen, Number(event.target.value))}
      />
    </div>
  );
}

/** A stretch of the week: one shift, or other times. */
export function WindowFields({
  from,
  to,
  frame,
  errors,
  onChange,
}: {
  from: number;
  to: number;
  frame: TimeFrame;
  errors: { from?: string | undefined; to?: string | undefined };
  onChange: (window: { from: number; to: number }) => void;
}) {
  const { spans, zone } = frame;
  const at = spans.findIndex((span) => span.from === from && span.to === to);
  const [other, setOther] = useState(at < 0);
  const free = other || at < 0;
  return (
    <div className="grid gap-2">
      <SelectField
        label="When"
        value={free ? 'other' : String(at)}
        options={[
          ...spans.map((span, i) => ({
            value: String(i),
            label: `${span.name}, ${dayAndTime(zone, span.from)} to ${dayAndTime(zone, span.to)}`,
          })),
          { value: 'other', label: 'Other times' },
        ]}
        error={free ? undefined : (errors.from ?? errors.to)}
        onChange={(event) => {
          const { value } = event.target;
          setOther(value === 'other');
          const span = spans.at(Number(value));
          if (value !== 'other' && span) onChange({ from: span.from, to: span.to });
        }}
      />
      {free ? (
        <>
          <InstantField
            label="From"
            value={from}
            frame={frame}
            error={errors.from}
            onChange={(value) => onChange({ from: value, to })}
          />
          <InstantField
            label="To"
            value={to}
            frame={frame}
            error={errors.to}
            onChange={(value) => onChange({ from, to: value })}
          />
        </>
      ) : null}
    </div>
  );
}
