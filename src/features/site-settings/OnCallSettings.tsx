import { setOnCallAddress } from '../../../shared/api/alerts.ts';
import { TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { SkeletonLines } from '../../components/Skeleton.tsx';
import { useOnCallAddress, useSetOnCallAddress } from './queries.ts';
import { bodyResolver } from './setting-fields.ts';
import { SettingSection } from './SettingSection.tsx';
import { useSettingForm, type SettingForm } from './use-setting-form.ts';

interface AddressForm extends SettingForm {
  address: string;
}

const bodyOf = ({ address }: Pick<AddressForm, 'address'>) => ({ address: address.trim() === '' ? null : address });
const schema = setOnCallAddress.body;
if (!schema) throw new Error('the on-call address has no body');
const resolver = bodyResolver<AddressForm>(schema, bodyOf);

function AddressFields({ siteId, address }: { siteId: string; address: string | null }) {
  const stored: AddressForm = { revision: 0, address: address ?? '' };
  const { form, dirty } = useSettingForm(stored, resolver);
  const save = useSetOnCallAddress(siteId);
  const submit = form.handleSubmit((values) =>
    save.mutate(bodyOf(values).address, {
      onSuccess: (reply) => form.reset({ revision: 0, address: reply.address ?? '' }),
    }),
  );
  return (
    <SettingSection
      id="on-call"
      title="On-call address"
      lede="When an area newly passes its alert limit, one mail goes here. It may be late and is not a pager: it never replaces calling somebody."
      mayEdit
      dirty={dirty}
      saving={save.isPending}
      saved={save.isSuccess}
      error={save.error}
      onSave={() => void submit()}
      onReset={() => form.reset(stored)}
    >
      <div className="max-w-xl">
        <TextField
          label="E-mail address"
          hint="One address. Empty: no alert mail is sent."
          type="email"
          maxLength={254}
          error={form.formState.errors.address?.message}
          {...form.register('address')}
        />
      </div>
    </SettingSection>
  );
}

/** Where alert mail goes; told to those who may set it only. */
export function OnCallSettings({ siteId }: { siteId: string }) {
  const query = useOnCallAddress(siteId);
  if (query.isError && !query.data) return <ProblemNotice error={query.error} onRetry={() => void query.refetch()} />;
  if (!query.data) return <SkeletonLines lines={2} label="Loading the on-call address" />;
  return <AddressFields siteId={siteId} address={query.data.address} />;
}
