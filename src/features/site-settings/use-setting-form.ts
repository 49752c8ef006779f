import { useEffect } from 'react';
import { useForm } from 'react-hook-form';
import type { DefaultValues, Resolver } from 'react-hook-form';

/** What the fields of a section hold, with the revision that they were filled from. */
export interface SettingForm {
  revision: number;
}

/**
 * A form over one section. It follows what is stored as long as nothing was typed; once something was, it keeps the
 * revision that it was filled from, so that a save over somebody else's change is refused by the server.
 */
export function useSettingForm<Form extends SettingForm>(stored: Form, resolver: Resolver<Form>) {
  const form = useForm<Form>({ resolver, defaultValues: stored as DefaultValues<Form> });
  const { isDirty } = form.formState;
  const { reset } = form;
  const text = JSON.stringify(stored);
  useEffect(() => {
    if (!isDirty) reset(JSON.parse(text) as Form);
  }, [isDirty, reset, text]);
  return { form, dirty: isDirty };
}
