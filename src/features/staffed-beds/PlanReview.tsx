import { zodResolver } from '@hookform/resolvers/zod';
import { useForm } from 'react-hook-form';
import { z } from 'zod';
import type { Site } from '../../../shared/api/sites.ts';
import { savePlanBody } from '../../../shared/api/staffed-beds.ts';
import { comparePlans } from '../../../shared/domain/compare-plans.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { Button } from '../../components/Button.tsx';
import { TextArea } from '../../components/Field.tsx';
import { Notice, ProblemNotice } from '../../components/Notice.tsx';
import { formatCount } from '../../lib/format.ts';
import { bedHoursInWords, ChangeTable } from './ChangeTable.tsx';
import { groupFaults } from './group-faults.ts';
import type { DraftAction, PlanDraft, Planned } from './plan-draft.ts';

const faultsShown = 8;
const listed = (planned: Planned) => Object.entries(planned).map(([areaId, halfHours]) => ({ areaId, halfHours }));

const reviewForm = z.object({
  reason: savePlanBody.shape.reason.superRefine((text, context) => {
    const kind = screenNote(text);
    if (kind === null) return;
    context.addIssue({
      code: 'custom',
      message: `This looks like ${withArticle(kind)}. Leave out anything that could identify a person.`,
    });
  }),
});

/** What an edited plan changes, what keeps it from being saved, why it is changed, and the press that saves it. */
export function PlanReview({
  site,
  draft,
  saving,
  error,
  onChange,
  onSave,
}: {
  site: Site;
  draft: PlanDraft;
  saving: boolean;
  error: unknown;
  onChange: (action: DraftAction) => void;
  onSave: (reason: string) => void;
}) {
  const form = useForm({ resolver: zodResolver(reviewForm), defaultValues: { reason: '' } });
  const changes = comparePlans(listed(draft.base), listed(draft.now));
  const faults = groupFaults(site.areas, draft.now);
  const reductions = changes.filter(({ before, after }) => before !== null && after !== null && after < before);
  const next = draft.version + 1;
  return (
    <section className="grid max-w-[58rem] grid-cols-1 gap-4" aria-labelledby="your-changes">
      <h2 id="your-changes" className="text-section">
        Not saved yet: {formatCount(changes.length, 'change')}, {bedHoursInWords(changes)}
      </h2>
      {faults.length > 0 ? (
        <Notice kind="caution" title="The plan cannot be saved like this" live>
          <ul className="list-disc pl-5">
            {faults.slice(0, faultsShown).map(({ at, message }) => (
              <li key={`${at} ${message}`}>
                <b className="text-ink">{at}: </b>
                {message}
              </li>
            ))}
            {faults.length > faultsShown ? (
              <li>and {formatCount(faults.length - faultsShown, 'more place')}.</li>
            ) : null}
          </ul>
        </Notice>
      ) : null}
      <ChangeTable
        caption={draft.version === 0 ? 'The first plan' : `Against version ${String(draft.version)}`}
        changes={changes}
        nameOf={(id) => site.areas.find((area) => area.id === id)?.name ?? id}
      />
      {reductions.length > 0 ? (
        <Notice
          kind="caution"
          title={`${formatCount(reductions.length, 'stretch', 'stretches')} with fewer beds than before`}
        >
          A low chance is not a reason to staff below your safe minimum. Say why fewer beds are enough, or not to be
          had.
        </Notice>
      ) : null}
      <form
        noValidate
        className="grid gap-3"
        onSubmit={(event) => void form.handleSubmit(({ reason }) => onSave(reason))(event)}
      >
        <TextArea
          label={reductions.length > 0 ? 'Reason, and why fewer beds' : 'Reason'}
          hint="Stands with the version. No patient details."
          maxLength={500}
          error={form.formState.errors.reason?.message}
          {...form.register('reason')}
        />
        {error ? <ProblemNotice error={error} /> : null}
        <div className="flex flex-wrap gap-4">
          <Button type="submit" disabled={faults.length > 0} busy={saving} busyText="Saving…">
            Save as version {next}
          </Button>
          <Button look="second" disabled={draft.past.length === 0} onClick={() => onChange({ type: 'undo' })}>
            Undo
          </Button>
          <Button look="second" disabled={draft.future.length === 0} onClick={() => onChange({ type: 'redo' })}>
            Redo
          </Button>
          <Button look="quiet" onClick={() => onChange({ type: 'discard' })}>
            Discard all changes
          </Button>
        </div>
      </form>
      <p className="text-quiet text-ink2">
        Planning aid. A forecast is a range: act on the percentile your policy names. It does not foresee a major
        incident or a sudden closure.
      </p>
    </section>
  );
}
