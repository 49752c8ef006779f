import { useFieldArray } from 'react-hook-form';
import { shiftsBody, type SiteSettings } from '../../../shared/api/site-settings.ts';
import { clockText, readClock } from '../../../shared/domain/clock-text.ts';
import { Button } from '../../components/Button.tsx';
import { TextField } from '../../components/Field.tsx';
import { useSaveShifts } from './queries.ts';
import { bodyResolver, identifierFault, neededNumber, numberOf, optionalText } from './setting-fields.ts';
import { SettingSection } from './SettingSection.tsx';
import { useSettingForm, type SettingForm } from './use-setting-form.ts';

interface ShiftForm extends SettingForm {
  shifts: { shiftId: string; name: string; startMinute: string; endMinute: string; leadTimeHours: string }[];
}

const minute = (text: string) => readClock(text) ?? Number.NaN;

function bodyOf(form: ShiftForm) {
  return {
    revision: form.revision,
    shifts: form.shifts.map(({ shiftId, name, startMinute, endMinute, leadTimeHours }) => ({
      id: shiftId === '' ? null : shiftId,
      name,
      startMinute: minute(startMinute),
      endMinute: minute(endMinute),
      leadTimeHours: numberOf(leadTimeHours) === null ? null : neededNumber(leadTimeHours),
    })),
  };
}

const resolver = bodyResolver<ShiftForm>(
  shiftsBody,
  (form) => bodyOf(form),
  ({ shifts }) =>
    shifts.flatMap(({ name }, index) => {
      const message = identifierFault(name);
      return message ? [{ path: ['shifts', index, 'name'], message }] : [];
    }),
);

/** Shifts, their handovers, and until when staff can be booked for them. */
export function ShiftSettings({ settings, mayEdit }: { settings: SiteSettings; mayEdit: boolean }) {
  const { site, revisions } = settings;
  const stored: ShiftForm = {
    revision: revisions.shifts,
    shifts: site.shifts.map(({ id, name, startMinute, endMinute, leadTimeHours }) => ({
      shiftId: id,
      name,
      startMinute: clockText(startMinute),
      endMinute: clockText(endMinute),
      leadTimeHours: optionalText(leadTimeHours),
    })),
  };
  const { form, dirty } = useSettingForm(stored, resolver);
  const rows = useFieldArray({ control: form.control, name: 'shifts' });
  const save = useSaveShifts(site.id);
  const { errors } = form.formState;
  const submit = form.handleSubmit((values) =>
    save.mutate(shiftsBody.parse(bodyOf(values)), { onSuccess: () => form.reset(values) }),
  );
  return (
    <SettingSection
      id="shifts"
      title="Shifts and handovers"
      lede="In the site’s time. Two shifts may overlap by up to two hours, the handover; in it the incoming shift is in charge. Together they must cover the whole day."
      mayEdit={mayEdit}
      dirty={dirty}
      saving={save.isPending}
      saved={save.isSuccess}
      error={save.error}
      fault={errors.shifts?.message ?? errors.shifts?.root?.message}
      onSave={() => void submit()}
      onReset={() => form.reset(stored)}
    >
      {rows.fields.map((row, index) => {
        const fault = errors.shifts?.[index];
        return (
          <div
            key={row.id}
            className="grid items-start gap-x-4 gap-y-2 sm:grid-cols-2 lg:grid-cols-[2fr_1fr_1fr_1.4fr_auto]"
          >
            <TextField
              label="Shift"
              maxLength={40}
              error={fault?.name?.message}
              {...form.register(`shifts.${index}.name`)}
            />
            <TextField
              label="Starts"
              placeholder="07:00"
              error={fault?.startMinute?.message}
              {...form.register(`shifts.${index}.startMinute`)}
            />
            <TextField
              label="Ends"
              placeholder="07:00"
              error={fault?.endMinute?.message}
              {...form.register(`shifts.${index}.endMinute`)}
            />
            <TextField
              label="Lead time to book, hours"
              inputMode="numeric"
              error={fault?.leadTimeHours?.message}
              {...form.register(`shifts.${index}.leadTimeHours`)}
            />
            {mayEdit ? (
              <Button look="quiet" className="lg:mt-8" onClick={() => rows.remove(index)}>
                Remove<span className="sr-only"> shift {index + 1}</span>
              </Button>
            ) : null}
          </div>
        );
      })}
      <p className="text-quiet text-ink2">
        Lead time: hours before a shift starts until which staff can still be booked for it. Left empty, Week ahead goes
        by the area’s notice alone.
      </p>
      {mayEdit ? (
        <Button
          look="second"
          className="justify-self-start"
          onClick={() => rows.append({ shiftId: '', name: '', startMinute: '', endMinute: '', leadTimeHours: '' })}
        >
          Add a shift
        </Button>
      ) : null}
    </SettingSection>
  );
}
