import { useState } from 'react';
import type { adoptions, ScenarioLine, WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { Button } from '../../components/Button.tsx';
import { TextArea } from '../../components/Field.tsx';
import { Notice, ProblemNotice } from '../../components/Notice.tsx';
import { formatCount, formatDateTime, formatNumber } from '../../lib/format.ts';
import { changeInWords } from './plan-words.ts';
import { useAdoptScenario } from './queries.ts';

/** Puts a confirmed plan's beds into the staffed-bed plan, with the cautions beside the press. */
export function AdoptPlan({
  siteId,
  plan,
  areas,
  timeZone,
}: {
  siteId: string;
  plan: ScenarioLine;
  areas: WhatIfBasis['areas'];
  timeZone: string;
}) {
  const [reason, setReason] = useState('');
  const [as, setAs] = useState<(typeof adoptions)[number]>('these dates');
  const [asked, setAsked] = useState(false);
  const adopt = useAdoptScenario(siteId, plan.id);
  const beds = plan.changes.filter(({ kind }) => kind === 'beds');
  if (plan.adoptedAt !== null) {
    return (
      <Notice title={`Adopted ${formatDateTime(plan.adoptedAt, timeZone)}, ${plan.adoptedBy ?? ''}.`}>
        {plan.adoptedAs === 'every week' ? (
          <p>
            Its beds stand in the weekly plan
            {adopt.data?.planVersion ? `, version ${formatNumber(adopt.data.planVersion)}` : ''}; earlier versions are
            kept under Staffed beds.
          </p>
        ) : adopt.data ? (
          <p>
            {formatCount(adopt.data.exceptions, 'dated exception')} made in the staffed-bed plan; a new outlook follows.
          </p>
        ) : (
          <p>Its beds are dated exceptions of the staffed-bed plan.</p>
        )}
      </Notice>
    );
  }
  if (beds.length === 0) {
    return <p className="text-ink2">This plan changes no staffed beds: there is nothing to adopt from it.</p>;
  }
  const kind = screenNote(reason);
  const fault =
    reason.trim().length < 3
      ? 'Say why, in at least 3 characters.'
      : kind !== null
        ? `This seems to hold ${withArticle(kind)}. Say it without anything that identifies a person.`
        : undefined;
  return (
    <form
      className="grid gap-4 lg:grid-cols-2"
      onSubmit={(event) => {
        event.preventDefault();
        setAsked(true);
        if (!fault) adopt.mutate({ reason: reason.trim(), as });
      }}
    >
      <div className="grid content-start gap-3">
        <h3 className="text-h2">Adopt into the staffed-bed plan</h3>
        <ul className="list-disc pl-5 text-ink2">
          {beds.map((change) => (
            <li key={JSON.stringify(change)}>{changeInWords(change, areas, timeZone)}</li>
          ))}
        </ul>
        {plan.changes.length > beds.length ? (
          <p className="text-ink2">Only its beds are adopted; what it says of arrivals and stays is a supposition.</p>
        ) : null}
        <fieldset className="grid gap-1">
          <legend className="font-bold text-ink">When they hold</legend>
          <Choice checked={as === 'these dates'} onChoose={() => setAs('these dates')}>
            On these dates only, as dated exceptions
          </Choice>
          <Choice checked={as === 'every week'} onChoose={() => setAs('every week')}>
            Every week from now on, as a new version of the weekly plan
          </Choice>
        </fieldset>
        <TextArea
          label="Reason"
          hint="Kept with the staffed-bed plan. Nothing that identifies a person."
          value={reason}
          maxLength={500}
          error={asked ? fault : undefined}
          onChange={(event) => setReason(event.target.value)}
        />
        <Button type="submit" className="justify-self-start" busy={adopt.isPending} busyText="Adopting…">
          Adopt these beds
        </Button>
        {adopt.error ? <ProblemNotice error={adopt.error} /> : null}
      </div>
      <Notice kind="caution" title="Before you adopt" className="self-start">
        <ul className="list-disc pl-5">
          <li>
            Planning aid. Not for decisions about any individual patient. Follow your hospital’s clinical governance,
            escalation policy and local law; a licensed clinician’s judgement comes first.
          </li>
          <li>
            A low chance is not a reason to staff below your safe minimum: less than that is refused, and a reduction is
            only as good as its reason.
          </li>
          <li>
            Stays are taken from nights with today’s doctors, tests and ward beds; more beds alone may not shorten them.
            Patients keep one area.
          </li>
          {as === 'every week' ? (
            <li>
              It was tried on the coming seven days alone: other weeks, seasons and holidays may need other beds. Look
              at Week ahead again after it is adopted.
            </li>
          ) : null}
          <li>It does not foresee a major incident or a sudden closure: use your incident plan.</li>
        </ul>
      </Notice>
    </form>
  );
}

function Choice({ checked, onChoose, children }: { checked: boolean; onChoose: () => void; children: string }) {
  return (
    <label className="flex min-h-11 cursor-pointer items-center gap-3">
      <input type="radio" name="adopt-as" className="size-5 accent-act" checked={checked} onChange={onChoose} />
      {children}
    </label>
  );
}
