import { zodResolver } from '@hookform/resolvers/zod';
import { useId, useState, type ReactNode } from 'react';
import { useForm } from 'react-hook-form';
import { approveModel } from '../../../shared/api/arrival-models.ts';
import type { ModelSummary } from '../../../shared/api/arrival-models.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import type { z } from 'zod';
import { Button } from '../../components/Button.tsx';
import { TextArea } from '../../components/Field.tsx';
import { Notice, ProblemNotice } from '../../components/Notice.tsx';
import { useJudgeModel } from './queries.ts';

const approvalBody = approveModel.body;
if (!approvalBody) throw new Error('approval takes a reason');
const reasonForm = approvalBody.superRefine(({ reason }, context) => {
  const kind = screenNote(reason);
  if (kind) {
    context.addIssue({
      code: 'custom',
      path: ['reason'],
      message: `This looks like a ${kind}. Leave out anything that could identify a person.`,
    });
  }
});
type ReasonForm = z.input<typeof reasonForm>;

/** Approve or retire, always with a reason; the person who fitted a candidate is told why they may not approve it. */
export function JudgeModel({
  siteId,
  model,
  beside,
}: {
  siteId: string;
  model: ModelSummary;
  /** What the comparison with the model in use says, read before approving. */
  beside?: ReactNode;
}) {
  const judging = useJudgeModel(siteId, model.id);
  const [verdict, setVerdict] = useState<'approve' | 'retire'>('approve');
  const formId = useId();
  const form = useForm<ReasonForm>({ resolver: zodResolver(reasonForm), defaultValues: { reason: '' } });
  if (model.status !== 'candidate' && model.status !== 'in use') return null;
  const mayApprove = model.status === 'candidate' && !model.fittedByCaller;

  const press = (next: 'approve' | 'retire') => {
    setVerdict(next);
    void form.handleSubmit((values) =>
      judging.mutate({ verdict: next, reason: values.reason }, { onSuccess: () => form.reset() }),
    )();
  };

  return (
    <section aria-labelledby={`${formId}-title`} className="border-t border-hair pt-4">
      <div className="grid max-w-xl gap-3">
        <h2 id={`${formId}-title`} className="text-section">
          {model.status === 'candidate' ? 'Approve or retire this candidate' : 'Retire this model'}
        </h2>
        {model.status === 'candidate' && model.fittedByCaller ? (
          <Notice title="You fitted this model, so somebody else has to approve it.">
            <p>
              Two people look at each model before beds are planned by it. Ask another operations manager of the site.
            </p>
          </Notice>
        ) : null}
        {model.status === 'candidate' ? beside : null}
        {model.status === 'in use' ? (
          <p className="text-ink2">Without a model in use Tonight has no outlook, until another one is approved.</p>
        ) : null}
        <TextArea
          label="Reason"
          hint="Kept with the model and in the audit trail. No patient details."
          error={form.formState.errors.reason?.message}
          {...form.register('reason')}
        />
        {judging.error ? <ProblemNotice error={judging.error} /> : null}
        <div className="flex gap-4">
          {mayApprove ? (
            <Button
              onClick={() => press('approve')}
              busy={judging.isPending && verdict === 'approve'}
              busyText="Approving…"
            >
              Approve and put into use
            </Button>
          ) : null}
          <Button
            look="second"
            onClick={() => press('retire')}
            busy={judging.isPending && verdict === 'retire'}
            busyText="Retiring…"
          >
            Retire
          </Button>
        </div>
      </div>
    </section>
  );
}
