import { zodResolver } from '@hookform/resolvers/zod';
import { useMemo } from 'react';
import { useForm, useWatch } from 'react-hook-form';
import type { Site } from '../../../shared/api/sites.ts';
import type { AddBedExceptionBody } from '../../../shared/api/staffed-beds.ts';
import { localDate } from '../../../shared/domain/zoned-time.ts';
import { Button } from '../../components/Button.tsx';
import { SelectField, TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatDateTime, zoneOf } from '../../lib/format.ts';
import { useUnsavedWork } from '../../lib/unsaved-work.ts';
import { emptyException, exceptionSchema, exceptionTimes, ownTimes, type ExceptionForm } from './exception-form.ts';
import { useAddException } from './queries.ts';

/** Asks for a dated exception: area, day and shift (or times of one's own), beds and why. */
export function ExceptionFields({ site, now }: { site: Site; now: number }) {
  const add = useAddException(site.id);
  const schema = useMemo(() => exceptionSchema(site, now), [site, now]);
  const today = localDate(zoneOf(site.timeZone).toLocal(now));
  const form = useForm<ExceptionForm, unknown, AddBedExceptionBody>({
    resolver: zodResolver(schema),
    defaultValues: emptyException(site, today),
  });
  const { errors, isDirty } = form.formState;
  useUnsavedWork(isDirty, 'an exception that is not saved yet');
  const [date, shiftId, fromTime, untilDate, untilTime] = useWatch({
    control: form.control,
    name: ['date', 'shiftId', 'fromTime', 'untilDate', 'untilTime'],
  });
  const { fromAt, untilAt } = exceptionTimes(site, { date, shiftId, fromTime, untilDate, untilTime });
  const own = shiftId === ownTimes;
  return (
    <form
      noValidate
      className="grid max-w-[58rem] gap-4"
      onSubmit={(event) =>
        void form.handleSubmit((body) =>
          add.mutate(body, {
            onSuccess: () => form.reset({ ...form.getValues(), beds: '', reason: '' }),
          }),
        )(event)
      }
    >
      <div className="grid grid-cols-1 gap-4 sm:grid-cols-2 lg:grid-cols-4">
        <SelectField
          label="Area"
          error={errors.areaId?.message}
          options={site.areas.map(({ id, name }) => ({ value: id, label: name }))}
          {...form.register('areaId')}
        />
        <TextField label="Day" type="date" error={errors.date?.message} {...form.register('date')} />
        <SelectField
          label="Shift"
          error={errors.shiftId?.message}
          options={[
            ...site.shifts.map(({ id, name }) => ({ value: id, label: name })),
            { value: ownTimes, label: 'Other times' },
          ]}
          {...form.register('shiftId')}
        />
        <TextField label="Staffed beds" inputMode="numeric" error={errors.beds?.message} {...form.register('beds')} />
        {own ? (
          <>
            <TextField
              label="From"
              placeholder="07:00"
              error={errors.fromTime?.message}
              {...form.register('fromTime')}
            />
            <TextField label="Last day" type="date" error={errors.untilDate?.message} {...form.register('untilDate')} />
            <TextField
              label="Until"
              placeholder="07:00"
              error={errors.untilTime?.message}
              {...form.register('untilTime')}
            />
          </>
        ) : null}
      </div>
      <p className="text-quiet text-ink2">
        {fromAt !== null && untilAt !== null
          ? `Holds from ${formatDateTime(fromAt, site.timeZone)} to ${formatDateTime(untilAt, site.timeZone)}, instead of the plan.`
          : 'Enter a day and times.'}
      </p>
      <TextField
        label="Reason"
        hint="Stands with the exception. No patient details."
        maxLength={500}
        error={errors.reason?.message}
        {...form.register('reason')}
      />
      {add.error ? <ProblemNotice error={add.error} /> : null}
      <Button type="submit" className="justify-self-start" busy={add.isPending} busyText="Saving…">
        Add the exception
      </Button>
    </form>
  );
}
