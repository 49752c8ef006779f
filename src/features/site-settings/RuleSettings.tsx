import { useWatch } from 'react-hook-form';
import { rulesBody, type SiteSettings } from '../../../shared/api/site-settings.ts';
import { clockText, readClock } from '../../../shared/domain/clock-text.ts';
import { SelectField, TextField } from '../../components/Field.tsx';
import { useHolidayRegions, useSaveRules } from './queries.ts';
import { bodyResolver, numberOf, optionalText, percentText, shareOf } from './setting-fields.ts';
import { SettingSection } from './SettingSection.tsx';
import { useSettingForm, type SettingForm } from './use-setting-form.ts';

interface RuleForm extends SettingForm {
  planningRisk: string;
  waitLimitMinutes: string;
  /** "08:30, 16:00" */
  bedMeetingMinutes: string;
  country: string;
  region: string;
}

function bodyOf(form: RuleForm) {
  const times = form.bedMeetingMinutes.split(/[,;\s]+/).filter((part) => part !== '');
  return {
    revision: form.revision,
    planningRisk: shareOf(form.planningRisk),
    waitLimitMinutes: numberOf(form.waitLimitMinutes),
    bedMeetingMinutes: times.map((time) => readClock(time) ?? Number.NaN),
    country: form.country,
    region: form.region === '' ? null : form.region,
  };
}

const resolver = bodyResolver<RuleForm>(rulesBody, (form) => bodyOf(form));

/** The first fault of the times, wherever in the list it stands. */
function timesFault(fault: unknown): string | undefined {
  if (Array.isArray(fault)) return timesFault(fault.find((one) => one !== undefined));
  const message = (fault as { message?: string } | undefined)?.message;
  return message === undefined
    ? undefined
    : /number|time/i.test(message)
      ? 'Times like 08:30, with commas between'
      : message;
}

/** The risk that beds are planned to, the wait limit, the bed meetings, and whose public holidays count. */
export function RuleSettings({ settings, mayEdit }: { settings: SiteSettings; mayEdit: boolean }) {
  const { site, revisions } = settings;
  const stored: RuleForm = {
    revision: revisions.rules,
    planningRisk: percentText(site.planningRisk),
    waitLimitMinutes: optionalText(site.waitLimitMinutes),
    bedMeetingMinutes: site.bedMeetingMinutes.map(clockText).join(', '),
    country: site.country,
    region: site.region ?? '',
  };
  const { form, dirty } = useSettingForm(stored, resolver);
  const save = useSaveRules(site.id);
  const known = useHolidayRegions(site.id, mayEdit);
  const country = useWatch({ control: form.control, name: 'country' });
  const { errors } = form.formState;
  const countries = known.data?.countries ?? [{ code: site.country, name: site.country, regions: [] }];
  const regions = countries.find(({ code }) => code === country)?.regions ?? [];
  // What is stored stays a choice while the list is not there yet.
  const regionOptions =
    known.data || site.region === null || country !== site.country
      ? regions
      : [{ code: site.region, name: site.region }];
  const submit = form.handleSubmit((values) =>
    save.mutate(rulesBody.parse(bodyOf(values)), { onSuccess: () => form.reset(values) }),
  );
  return (
    <SettingSection
      id="rules"
      title="Planning rules"
      lede="What every figure of beds on these pages is printed for."
      mayEdit={mayEdit}
      dirty={dirty}
      saving={save.isPending}
      saved={save.isSuccess}
      error={save.error}
      onSave={() => void submit()}
      onReset={() => form.reset(stored)}
    >
      <div className="grid items-start gap-4 sm:grid-cols-2 lg:grid-cols-3">
        <TextField
          label="Planning risk, %"
          hint="Beds are planned so that at most this share of shifts runs short."
          inputMode="decimal"
          error={errors.planningRisk?.message}
          {...form.register('planningRisk')}
        />
        <TextField
          label="Wait limit, minutes"
          hint="A wait for a bed space past this is too long by your rule. Empty: none."
          inputMode="numeric"
          error={errors.waitLimitMinutes?.message}
          {...form.register('waitLimitMinutes')}
        />
        <TextField
          label="Bed meetings"
          hint="Times of day, with commas between. Empty: none."
          placeholder="08:30, 16:00"
          error={timesFault(errors.bedMeetingMinutes)}
          {...form.register('bedMeetingMinutes')}
        />
        <SelectField
          label="Public holidays of"
          error={errors.country?.message}
          options={countries.map(({ code, name }) => ({ value: code, label: name }))}
          {...form.register('country', { onChange: () => form.setValue('region', '', { shouldDirty: true }) })}
        />
        <SelectField
          label="Region"
          error={errors.region?.message}
          options={[
            { value: '', label: 'Whole country' },
            ...regionOptions.map(({ code, name }) => ({ value: code, label: name })),
          ]}
          {...form.register('region')}
        />
      </div>
      {known.isError && mayEdit ? (
        <p className="text-quiet text-ink2">
          The list of countries could not be loaded; reload the page to choose another.
        </p>
      ) : null}
    </SettingSection>
  );
}
