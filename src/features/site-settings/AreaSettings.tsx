import { useWatch } from 'react-hook-form';
import type { Control, UseFormRegister } from 'react-hook-form';
import { areasBody, type SiteSettings } from '../../../shared/api/site-settings.ts';
import type { CareArea } from '../../../shared/api/sites.ts';
import type { LimitNight } from '../../../shared/forecasting/limit-record.ts';
import { TextArea, TextField } from '../../components/Field.tsx';
import { formatCount } from '../../lib/format.ts';
import { limitRecordInWords } from './limit-record-words.ts';
import { useLimitRecord, useSaveAreas } from './queries.ts';
import {
  bodyResolver,
  identifierFault,
  neededNumber,
  numberOf,
  optionalText,
  percentText,
  shareOf,
} from './setting-fields.ts';
import { SettingSection } from './SettingSection.tsx';
import { useSettingForm, type SettingForm } from './use-setting-form.ts';

interface AreaForm extends SettingForm {
  areas: {
    areaId: string;
    alertLimit: string;
    escalationNote: string;
    bedStep: string;
    noticeHours: string;
    bedsPerNurse: string;
    lendsTo: string[];
  }[];
}

function bodyOf(form: AreaForm) {
  return {
    revision: form.revision,
    areas: form.areas.map(({ areaId, alertLimit, escalationNote, bedStep, noticeHours, bedsPerNurse, lendsTo }) => ({
      id: areaId,
      alertLimit: shareOf(alertLimit),
      escalationNote,
      bedStep: neededNumber(bedStep),
      noticeHours: neededNumber(noticeHours),
      bedsPerNurse: numberOf(bedsPerNurse),
      lendsTo,
    })),
  };
}

const resolver = bodyResolver<AreaForm>(
  areasBody,
  (form) => bodyOf(form),
  ({ areas }) =>
    areas.flatMap(({ escalationNote }, index) => {
      const message = identifierFault(escalationNote);
      return message ? [{ path: ['areas', index, 'escalationNote'], message }] : [];
    }),
);

/** How often the limit that stands in the field would have warned. */
function RecordLine({
  control,
  index,
  nights,
}: {
  control: Control<AreaForm>;
  index: number;
  /** Null: could not be loaded; undefined: not yet. */
  nights: readonly LimitNight[] | null | undefined;
}) {
  const typed = useWatch({ control, name: `areas.${index}.alertLimit` });
  const limit = shareOf(typed);
  if (nights === undefined) return <p className="text-quiet text-ink2">Looking at the last 8 weeks…</p>;
  if (nights === null) return <p className="text-quiet text-ink2">The last 8 weeks could not be loaded.</p>;
  if (!(limit >= 0.01 && limit <= 0.99)) return null;
  return (
    <p className="text-quiet text-ink2" aria-live="polite">
      {limitRecordInWords(nights, limit)}
    </p>
  );
}

function Lending({
  area,
  areas,
  index,
  register,
}: {
  area: CareArea;
  areas: readonly CareArea[];
  index: number;
  register: UseFormRegister<AreaForm>;
}) {
  const others = areas.filter(({ id }) => id !== area.id);
  if (others.length === 0) return null;
  return (
    <fieldset>
      <legend className="font-bold text-ink">May lend staffed beds to</legend>
      <div className="flex flex-wrap gap-x-6">
        {others.map(({ id, name }) => (
          <label key={id} className="flex min-h-11 items-center gap-2">
            <input type="checkbox" className="size-5 accent-act" value={id} {...register(`areas.${index}.lendsTo`)} />
            {name}
          </label>
        ))}
      </div>
    </fieldset>
  );
}

/** Each area's alert limit with its record, escalation text, and how beds are opened and lent. */
export function AreaSettings({ settings, mayEdit }: { settings: SiteSettings; mayEdit: boolean }) {
  const { site, revisions } = settings;
  const stored: AreaForm = {
    revision: revisions.areas,
    areas: site.areas.map((area) => ({
      areaId: area.id,
      alertLimit: percentText(area.alertLimit),
      escalationNote: area.escalationNote,
      bedStep: String(area.bedStep),
      noticeHours: String(area.noticeHours),
      bedsPerNurse: optionalText(area.bedsPerNurse),
      lendsTo: area.lendsTo,
    })),
  };
  const { form, dirty } = useSettingForm(stored, resolver);
  const save = useSaveAreas(site.id);
  const record = useLimitRecord(site.id);
  const { errors } = form.formState;
  const submit = form.handleSubmit((values) =>
    save.mutate(areasBody.parse(bodyOf(values)), { onSuccess: () => form.reset(values) }),
  );
  return (
    <SettingSection
      id="areas"
      title="Care areas"
      lede="Past its alert limit, Tonight speaks up for an area and shows your escalation text beside the risk. Bed spaces that exist and the safe minimum are set by the administrator."
      mayEdit={mayEdit}
      dirty={dirty}
      saving={save.isPending}
      saved={save.isSuccess}
      error={save.error}
      onSave={() => void submit()}
      onReset={() => form.reset(stored)}
    >
      {site.areas.map((area, index) => {
        const fault = errors.areas?.[index];
        const nights = record.data?.areas.find(({ areaId }) => areaId === area.id)?.nights;
        return (
          <section key={area.id} aria-label={area.name} className="grid gap-3 border-t-2 border-hair pt-4">
            <h3 className="text-area">
              {area.name}{' '}
              <span className="text-quiet font-semibold text-ink2">
                {formatCount(area.spaces, `${area.spaceKind} space`)} exist, never staffed below {area.safeMinimum}
              </span>
            </h3>
            <div className="grid items-start gap-4 sm:grid-cols-2 lg:grid-cols-4">
              <TextField
                label="Alert limit, %"
                inputMode="decimal"
                error={fault?.alertLimit?.message}
                {...form.register(`areas.${index}.alertLimit`)}
              />
              <TextField
                label="Opened in steps of"
                inputMode="numeric"
                error={fault?.bedStep?.message}
                {...form.register(`areas.${index}.bedStep`)}
              />
              <TextField
                label="Notice to open, hours"
                inputMode="decimal"
                error={fault?.noticeHours?.message}
                {...form.register(`areas.${index}.noticeHours`)}
              />
              <TextField
                label={area.spaceKind === 'bed' ? 'Beds a nurse looks after' : 'Chairs a nurse looks after'}
                inputMode="decimal"
                error={fault?.bedsPerNurse?.message}
                {...form.register(`areas.${index}.bedsPerNurse`)}
              />
            </div>
            <RecordLine
              control={form.control}
              index={index}
              nights={record.isError ? null : (nights ?? (record.data ? [] : undefined))}
            />
            <TextArea
              label="Escalation text"
              maxLength={2000}
              error={fault?.escalationNote?.message}
              {...form.register(`areas.${index}.escalationNote`)}
            />
            <Lending area={area} areas={site.areas} index={index} register={form.register} />
          </section>
        );
      })}
      <p className="text-quiet text-ink2">
        A night counts as warned of when the outlook that stood at its start printed a chance past the limit for any
        hour, and as short when need was above staffed beds at any full hour. A ratio of nurses is your own rule; left
        empty, no nurse hours are shown. A low chance is not a reason to staff below the safe minimum.
      </p>
    </SettingSection>
  );
}
