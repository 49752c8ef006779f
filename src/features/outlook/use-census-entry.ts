import { createContext, use, useEffect, useMemo, useRef, useState } from 'react';
import { useForm } from 'react-hook-form';
import type { UseFormReturn } from 'react-hook-form';
import type { Census } from '../../../shared/api/censuses.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { keepDraft, readDraft } from './census-draft.ts';
import { censusBodyOf, censusFields, censusFormOf, censusResolver } from './census-form.ts';
import type { CensusContext, CensusForm } from './census-form.ts';
import { useUnsavedWork } from '../../lib/unsaved-work.ts';
import { useEnterCensus } from './queries.ts';

export interface CensusEntry {
  form: UseFormReturn<CensusForm, CensusContext>;
  /** What stands in the newest census. */
  base: CensusForm;
  census: Census | undefined;
  saving: boolean;
  /** Why the last save failed; the figures are still in the fields. */
  error: unknown;
  /** When the last save came through, server's clock; null before. */
  savedAt: number | null;
  /** Why saving brought no outlook. */
  noOutlook: string | null;
  save: () => void;
  /** Counts everything again with the same figures. */
  nothingChanged: () => void;
}

const Context = createContext<CensusEntry | null>(null);
export const CensusEntryProvider = Context.Provider;

export function useCensusEntryContext(): CensusEntry {
  const entry = use(Context);
  if (!entry) throw new Error('the census fields stand within CensusEntryProvider');
  return entry;
}

/**
 * The census of all areas as one form. Fields that nobody edited follow the newest census; edited
 * ones stay as typed until they are saved, also when saving fails.
 */
export function useCensusEntry(
  site: Site,
  census: Census | undefined,
  serverNow: () => number,
  /** False where the figures are those of an earlier time: nothing typed is put back or kept. */
  live = true,
): CensusEntry {
  const areaIds = useMemo(() => site.areas.map((area) => area.id), [site.areas]);
  const base = useMemo(() => censusFormOf(areaIds, census), [areaIds, census]);

  const entering = useEnterCensus(site.id);
  const [savedAt, setSavedAt] = useState<number | null>(null);
  const form = useForm<CensusForm, CensusContext>({
    defaultValues: base,
    values: base,
    resetOptions: { keepDirtyValues: true, keepErrors: true },
    resolver: censusResolver,
    context: { base, now: serverNow },
    mode: 'onSubmit',
    reValidateMode: 'onChange',
  });

  // Figures typed before the session was lost come back as edited ones.
  const restored = useRef(false);
  useEffect(() => {
    if (!live || restored.current || !census) return;
    restored.current = true;
    const draft = readDraft(site.id, areaIds, Date.now());
    if (!draft) return;
    draft.areas.forEach((area, index) => {
      for (const field of censusFields) {
        if (area[field] !== base.areas[index][field]) {
          form.setValue(`areas.${index}.${field}`, area[field], { shouldDirty: true });
        }
      }
    });
  }, [areaIds, base, census, form, live, site.id]);

  useEffect(
    () =>
      form.subscribe({
        formState: { values: true, isDirty: true },
        callback: ({ values, isDirty }) => {
          if (live) keepDraft(site.id, isDirty ? values : null, Date.now());
        },
      }),
    [form, live, site.id],
  );

  function send(countAgain: boolean) {
    if (entering.isPending) return;
    void form.handleSubmit((values) => {
      const takenAt = serverNow();
      entering.mutate(censusBodyOf(values, base, takenAt, countAgain), {
        onSuccess: () => {
          const typedSince = form.getValues();
          form.reset(values, { keepDirtyValues: false });
          // Before the figures typed meanwhile are put back: each of them is kept as a draft again.
          keepDraft(site.id, null, 0);
          typedSince.areas.forEach((area, index) => {
            for (const field of censusFields) {
              if (area[field] !== values.areas[index][field]) {
                form.setValue(`areas.${index}.${field}`, area[field], { shouldDirty: true });
              }
            }
          });
          setSavedAt(takenAt);
        },
      });
    })();
  }

  useUnsavedWork(live && form.formState.isDirty, 'a census that is not saved yet');

  return {
    form,
    base,
    census,
    saving: entering.isPending,
    error: entering.error,
    savedAt,
    noOutlook: entering.data?.outlookId === null ? entering.data.reason : null,
    save: () => send(false),
    nothingChanged: () => send(true),
  };
}
