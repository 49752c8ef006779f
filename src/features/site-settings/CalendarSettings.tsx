import { useState } from 'react';
import { useForm } from 'react-hook-form';
import { calendarBody, type CalendarDayEntry, type SiteSettings } from '../../../shared/api/site-settings.ts';
import { localSecondsOf } from '../../../shared/domain/zoned-time.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { SelectField, TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { announce } from '../../lib/announce.ts';
import { formatDate, formatWeekday } from '../../lib/format.ts';
import { useUnsavedWork } from '../../lib/unsaved-work.ts';
import { useAddCalendarDays, useRemoveCalendarDay } from './queries.ts';
import { bodyResolver, identifierFault, numberOf } from './setting-fields.ts';

interface DayForm {
  from: string;
  until: string;
  kind: 'local event' | 'closure';
  name: string;
  low: string;
  high: string;
}

const empty: DayForm = { from: '', until: '', kind: 'local event', name: '', low: '', high: '' };

/** A change of arrivals in per cent as a factor: "+20" is 1.2. */
const factorOf = (text: string) => {
  const points = numberOf(text.replace('−', '-').replace('%', ''));
  return points === null ? Number.NaN : Math.round((1 + points / 100) * 1000) / 1000;
};

const bodyOf = ({ from, until, kind, name, low, high }: DayForm) => ({
  from,
  until: until === '' ? from : until,
  kind,
  name,
  statedEffect: low.trim() === '' && high.trim() === '' ? null : [factorOf(low), factorOf(high)],
});

const resolver = bodyResolver<DayForm>(calendarBody, bodyOf, ({ name }) => {
  const message = identifierFault(name);
  return message ? [{ path: ['name'], message }] : [];
});

function effectInWords(effect: readonly [number, number] | null): string {
  if (effect === null) return 'As past days of this name';
  const [low, high] = effect.map((factor) => {
    const points = Math.round((factor - 1) * 100);
    return `${points < 0 ? '−' : '+'}${String(Math.abs(points))}`;
  });
  return `${low} to ${high} % arrivals`;
}

/** A local date in words; it has no zone of its own. */
const dayInWords = (date: string) =>
  `${formatWeekday(localSecondsOf(date), 'UTC')} ${formatDate(localSecondsOf(date), 'UTC')}`;

interface Row {
  key: string;
  date: string;
  name: string;
  kind: string;
  effect: string;
  own: CalendarDayEntry | null;
}

function AddDays({ siteId }: { siteId: string }) {
  const add = useAddCalendarDays(siteId);
  const form = useForm<DayForm>({ resolver, defaultValues: empty });
  const { errors, isDirty } = form.formState;
  useUnsavedWork(isDirty, 'a calendar day that is not saved yet');
  const effect = errors as { statedEffect?: { message?: string } | ({ message?: string } | undefined)[] };
  const stated = effect.statedEffect;
  const effectFault = Array.isArray(stated) ? stated.find((one) => one)?.message : stated?.message;
  return (
    <form
      noValidate
      className="grid gap-4"
      onSubmit={(event) =>
        void form.handleSubmit((values) =>
          add.mutate(calendarBody.parse(bodyOf(values)), { onSuccess: () => form.reset(empty) }),
        )(event)
      }
    >
      <h3 className="text-area">Add a day</h3>
      <div className="grid items-start gap-4 sm:grid-cols-2 lg:grid-cols-3">
        <TextField
          label="Day, or the first of several"
          type="date"
          error={errors.from?.message}
          {...form.register('from')}
        />
        <TextField label="Last day, if several" type="date" error={errors.until?.message} {...form.register('until')} />
        <SelectField
          label="Kind"
          options={[
            { value: 'local event', label: 'Local event' },
            { value: 'closure', label: 'Closure' },
          ]}
          {...form.register('kind')}
        />
        <TextField
          label="Name"
          hint="Days of the same name are learned from together."
          maxLength={80}
          error={errors.name?.message}
          {...form.register('name')}
        />
        <TextField
          label="Arrivals at least, %"
          hint="Beside an ordinary day, for instance +10 or -20. Empty: past days of this name speak."
          error={effectFault}
          {...form.register('low')}
        />
        <TextField
          label="Arrivals at most, %"
          hint="The upper end of what you expect, for instance +30."
          {...form.register('high')}
        />
      </div>
      {add.error ? <ProblemNotice error={add.error} /> : null}
      <Button type="submit" className="justify-self-start" busy={add.isPending} busyText="Adding…">
        Add to the calendar
      </Button>
    </form>
  );
}

/** Days that are not ordinary ones: the country's public holidays and the site's own, with their stated effects. */
export function CalendarSettings({ settings, mayEdit }: { settings: SiteSettings; mayEdit: boolean }) {
  const { site, ownDays, publicHolidays } = settings;
  const remove = useRemoveCalendarDay(site.id);
  const putBack = useAddCalendarDays(site.id);
  const [removing, setRemoving] = useState<string | null>(null);
  const rows: Row[] = [
    ...ownDays.map((own) => ({
      key: own.id,
      date: own.date,
      name: own.name,
      kind: own.kind === 'closure' ? 'Closure' : 'Local event',
      effect: effectInWords(own.statedEffect),
      own,
    })),
    ...publicHolidays.map(({ date, name }) => ({
      key: `${date} ${name}`,
      date,
      name,
      kind: 'Public holiday',
      effect: 'Learned from the log',
      own: null,
    })),
  ].sort((a, b) => a.date.localeCompare(b.date));
  return (
    <section
      id="calendar"
      aria-labelledby="calendar-title"
      className="grid max-w-[70rem] grid-cols-1 scroll-mt-4 gap-4"
    >
      <div>
        <h2 id="calendar-title" className="text-section">
          Calendar
        </h2>
        <p className="mt-1 max-w-[58rem] text-ink2">
          Days within a year that are not ordinary ones. Forecasts go by them from the next outlook on; what was issued
          before stays as it was.
        </p>
      </div>
      <DataTable
        caption="Unusual days of the next year"
        captionHidden
        rows={rows}
        rowKey={({ key }) => key}
        empty="No public holidays are known for this country, and no days of your own were entered."
        columns={[
          { key: 'date', header: 'Day', rowHeader: true, cell: ({ date }) => dayInWords(date) },
          { key: 'name', header: 'Name', cell: ({ name }) => name },
          { key: 'kind', header: 'Kind', cell: ({ kind }) => kind },
          { key: 'effect', header: 'Effect', cell: ({ effect }) => effect },
          ...(mayEdit
            ? [
                {
                  key: 'remove',
                  header: <span className="sr-only">Take out</span>,
                  cell: ({ own }: Row) =>
                    own ? (
                      <Button
                        look="quiet"
                        busy={remove.isPending && removing === own.id}
                        busyText="Taking out…"
                        aria-label={`Take out ${own.name}, ${dayInWords(own.date)}`}
                        onClick={() => {
                          setRemoving(own.id);
                          remove.mutate(own.id, {
                            onSuccess: () =>
                              announce(`${own.name}, ${dayInWords(own.date)}, was taken out.`, () => {
                                const { date, name, kind, statedEffect } = own;
                                putBack.mutate({ from: date, until: date, name, kind, statedEffect });
                              }),
                          });
                        }}
                      >
                        Take out
                      </Button>
                    ) : null,
                },
              ]
            : []),
        ]}
      />
      {remove.error ? <ProblemNotice error={remove.error} /> : null}
      {putBack.error ? <ProblemNotice error={putBack.error} /> : null}
      {mayEdit ? <AddDays siteId={site.id} /> : null}
    </section>
  );
}
