import { useId } from 'react';
import type { ReactNode } from 'react';
import { Button } from '../../components/Button.tsx';
import { Notice, ProblemNotice } from '../../components/Notice.tsx';
import { useUnsavedWork } from '../../lib/unsaved-work.ts';

/** One part of the settings, saved as a whole. For people who may only read, its fields stand but cannot be changed. */
export function SettingSection({
  id,
  title,
  lede,
  mayEdit,
  dirty,
  saving,
  saved,
  error,
  fault,
  onSave,
  onReset,
  children,
}: {
  /** Of the section in the address. */
  id: string;
  title: string;
  lede: ReactNode;
  mayEdit: boolean;
  dirty: boolean;
  saving: boolean;
  /** It was saved, and nothing was changed since. */
  saved: boolean;
  error: unknown;
  /** What is wrong with the section as a whole. */
  fault?: string | undefined;
  onSave: () => void;
  onReset: () => void;
  children: ReactNode;
}) {
  const titleId = useId();
  useUnsavedWork(dirty, `changes in “${title}” that are not saved yet`);
  return (
    <section id={id} aria-labelledby={titleId} className="max-w-[70rem] scroll-mt-4">
      <h2 id={titleId} className="text-section">
        {title}
      </h2>
      <p className="mt-1 max-w-[58rem] text-ink2">{lede}</p>
      <form
        noValidate
        className="mt-4"
        onSubmit={(event) => {
          event.preventDefault();
          onSave();
        }}
      >
        <fieldset disabled={!mayEdit} className="grid gap-5">
          {children}
          {fault ? (
            <p role="alert" className="font-bold text-warn">
              {fault}
            </p>
          ) : null}
        </fieldset>
        {error ? <ProblemNotice error={error} className="mt-4" /> : null}
        {mayEdit && dirty ? (
          <div className="mt-4 flex flex-wrap gap-4">
            <Button type="submit" busy={saving} busyText="Saving…">
              Save {title.toLowerCase()}
            </Button>
            <Button look="quiet" onClick={onReset}>
              Leave as it was
            </Button>
          </div>
        ) : null}
        {saved && !dirty ? (
          <Notice live className="mt-4">
            Saved.
          </Notice>
        ) : null}
      </form>
    </section>
  );
}
