import { useCallback, useDeferredValue, useMemo } from 'react';
import type { ReactNode } from 'react';
import type { Caution } from '../../../shared/api/outlooks.ts';
import type { ScenarioLine, WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { RiskMark } from '../../../shared/charts/RiskMark.tsx';
import { dayAndTime, type PlanChange } from '../../../shared/domain/plan-change.ts';
import { formatChance } from '../../../shared/domain/risk-word.ts';
import { Button } from '../../components/Button.tsx';
import { Notice } from '../../components/Notice.tsx';
import { PageHead } from '../../components/PageHead.tsx';
import { formatDateTime, zoneOf } from '../../lib/format.ts';
import { useUnsavedWork } from '../../lib/unsaved-work.ts';
import { halfHourBefore, newChange, spansOf } from './new-change.ts';
import { OpenedPlan } from './OpenedPlan.tsx';
import { PlanInHand } from './PlanInHand.tsx';
import { planFaults, PlanPreviewer } from './preview-plan.ts';
import { usePlanAction, useSaveScenario } from './queries.ts';
import { SavedPlans } from './SavedPlans.tsx';
import { SideBySide, type PlanColumn } from './SideBySide.tsx';
import { SmallestChangePanel } from './SmallestChangePanel.tsx';
import { usePlanDraft } from './use-plan-draft.ts';
import { headline, worstOf } from './what-if-words.ts';
import { WeekChances } from './WeekChances.tsx';

const mostOpened = 3;
const mostChanges = 40;
const nothing: PlanChange[] = [];

/** Plans side by side against as is; a change is answered at once by the exact method. */
export function WhatIfView({
  site,
  basis,
  cautions,
  plans,
  opened,
  rights,
  feed,
  howLink,
  onOpened,
}: {
  site: { id: string; name: string; timeZone: string };
  basis: WhatIfBasis;
  /** What is to be said now of the model and the logs behind it. */
  cautions: readonly Caution[];
  plans: readonly ScenarioLine[];
  /** Ids of the saved plans that stand beside as is. */
  opened: readonly string[];
  rights: { save: boolean; adopt: boolean };
  /** The calendar feed's panel, where the person may make one. */
  feed: ReactNode;
  howLink: ReactNode;
  onOpened: (ids: string[]) => void;
}) {
  const { timeZone } = site;
  const zone = zoneOf(timeZone);
  const previewer = useMemo(() => new PlanPreviewer(basis), [basis]);
  const spans = useMemo(() => spansOf(basis, zone), [basis, zone]);
  const asIs = useMemo(() => previewer.preview([]), [previewer]);
  const [draft, act] = usePlanDraft();
  const changes = useMemo(() => draft.changes.map(({ change }) => change), [draft.changes]);
  const faults = useMemo(() => planFaults(basis, changes, zone), [basis, changes, zone]);
  const inHand = useMemo(
    () => (changes.length === 0 || faults.length > 0 ? null : previewer.preview(changes)),
    [previewer, changes, faults],
  );
  const save = useSaveScenario(site.id);
  const confirm = usePlanAction(site.id, 'confirm');
  useUnsavedWork(rights.save && changes.length > 0, 'a plan that is not saved');

  const beside = useMemo(
    () =>
      opened.flatMap((id) => {
        const plan = plans.find((one) => one.id === id);
        if (!plan) return [];
        const old = planFaults(basis, plan.changes, zone);
        return [{ plan, preview: old.length > 0 ? null : previewer.preview(plan.changes) }];
      }),
    [opened, plans, basis, previewer, zone],
  );

  // Without a plan in hand the last one put beside as is is drawn.
  const drawn = beside.findLast(({ preview }) => preview !== null);
  const worst = worstOf(basis, asIs);
  const { hours } = basis.exact;
  const uncounted = basis.areas.filter(({ countedAt }) => countedAt === null);
  const frame = {
    zone,
    timeZone,
    from: halfHourBefore(zone, basis.issuedAt),
    to: hours[hours.length - 1],
    spans,
  };
  const columns: PlanColumn[] = [
    { key: 'as-is', head: 'As is', changes: [], preview: asIs },
    ...(changes.length > 0
      ? [
          {
            key: 'in-hand',
            head: 'The plan in hand',
            changes: faults.length > 0 ? [] : changes,
            preview: inHand,
            why: 'mend what is marked',
          },
        ]
      : []),
    ...beside.map(({ plan, preview }) => ({
      key: plan.id,
      head: (
        <>
          {plan.name}{' '}
          <Button look="quiet" className="text-quiet" onClick={() => onOpened(opened.filter((id) => id !== plan.id))}>
            Put away<span className="sr-only"> “{plan.name}”</span>
          </Button>
        </>
      ),
      changes: preview ? plan.changes : [],
      preview,
      why: 'its times have passed or no longer fit',
    })),
  ];
  const toggle = useCallback(
    (id: string) =>
      onOpened(opened.includes(id) ? opened.filter((one) => one !== id) : [...opened, id].slice(-mostOpened)),
    [opened, onOpened],
  );
  // What follows from a drag at leisure, and what does not follow from it at all, is kept out of its way.
  const settled = useDeferredValue(faults.length > 0 ? nothing : changes);
  const tryBeds = useCallback(
    (beds: PlanChange[]) => {
      const others = settled.filter(({ kind }) => kind !== 'beds');
      act({ do: 'replace', changes: [...others, ...beds].slice(0, mostChanges) });
      document.getElementById('plan-in-hand')?.scrollIntoView();
    },
    [act, settled],
  );
  const saved = useMemo(
    () => (
      <>
        {beside.map(({ plan, preview }) => (
          <OpenedPlan
            key={plan.id}
            site={site}
            plan={plan}
            areas={basis.areas}
            preview={plan.basisDigest === basis.digest ? preview : null}
            mayAdopt={rights.adopt}
          />
        ))}
        <SavedPlans
          siteId={site.id}
          plans={plans}
          areas={basis.areas}
          timeZone={site.timeZone}
          opened={opened}
          maySave={rights.save}
          onToggle={toggle}
          onStartFrom={(plan) => {
            act({ do: 'begin', name: plan.name, changes: plan.changes });
            document.getElementById('plan-in-hand')?.scrollIntoView();
          }}
        />
      </>
    ),
    [act, basis, beside, opened, plans, rights.adopt, rights.save, site, toggle],
  );

  return (
    <>
      <PageHead
        tab="What if"
        title={headline(basis, asIs, inHand)}
        lede={
          <p>
            {basis.areas[worst.area].name} is{' '}
            {worst.chance > basis.areas[worst.area].alertLimit ? 'furthest past' : 'nearest'} its limit as it stands:{' '}
            {formatChance(worst.chance).replace(' ', '\u00a0')} on {dayAndTime(zone, hours[worst.hour])}. Seven days,
            full hours, by the exact method.
            {cautions.map(({ kind, text }) => (
              <span key={kind + text} className="mt-1 flex gap-2 text-side font-extrabold text-ink">
                <RiskMark step={3} className="mt-1 h-4 w-5 shrink-0" />
                {text}
              </span>
            ))}
          </p>
        }
        aside={
          <div className="grid gap-0.5">
            <div>
              Figures of <b className="text-ink">{formatDateTime(basis.issuedAt, timeZone)}</b>
            </div>
            <div>
              Staffed-bed plan <b className="text-ink">version {basis.planVersion}</b>
            </div>
            <div>{howLink}</div>
          </div>
        }
      />
      <div className="page-pad grid grid-cols-[minmax(0,1fr)] gap-10 pt-2">
        {uncounted.length > 0 ? (
          <Notice
            kind="caution"
            title={
              uncounted.length === basis.areas.length
                ? 'Without a census: what the model expects stands in its place.'
                : `Not counted: ${uncounted.map(({ name }) => name).join(', ')}.`
            }
          >
            <p>
              The first hours rest on what the model expects to be there. Enter a census on Tonight before you act on
              them.
            </p>
          </Notice>
        ) : null}
        <div className="grid grid-cols-[minmax(0,1fr)] gap-x-10 gap-y-8 xl:grid-cols-[26rem_minmax(0,1fr)]">
          <PlanInHand
            draft={draft.changes}
            name={draft.name}
            basis={basis}
            frame={frame}
            faults={faults}
            maySave={rights.save}
            saving={save.isPending}
            error={save.error ?? confirm.error}
            onName={(name) => act({ do: 'name', name })}
            onAdd={(kind) =>
              act({ do: 'add', changes: [newChange(kind, basis, zone, { area: worst.area, at: hours[worst.hour] })] })
            }
            onChange={(key, change) => act({ do: 'change', key, change })}
            onRemove={(key) => act({ do: 'remove', key })}
            onClear={() => {
              save.reset();
              act({ do: 'begin', name: '', changes: [] });
            }}
            onSave={(andConfirm) =>
              save.mutate(
                { name: draft.name.trim(), changes },
                {
                  onSuccess: (saved) => {
                    act({ do: 'begin', name: '', changes: [] });
                    toggle(saved.id);
                    if (andConfirm) confirm.mutate(saved.id);
                  },
                },
              )
            }
          />
          <section
            className="grid grid-cols-[minmax(0,1fr)] min-w-0 content-start gap-3"
            aria-labelledby="side-by-side"
          >
            <h2 id="side-by-side" className="text-section">
              Side by side
            </h2>
            <SideBySide basis={basis} zone={zone} columns={columns} />
            <p
              className="max-w-[58rem] text-quiet text-ink2"
              data-answered={inHand ? inHand.milliseconds.toFixed(1) : ''}
            >
              {inHand
                ? `Answered in ${String(Math.max(1, Math.round(inHand.milliseconds)))} ms by the exact method in this browser: `
                : 'By the exact method in this browser: '}
              stays exponential, the week’s busyness one factor, a chance at each full hour. Confirmed figures come from
              the full simulation and speak of any time in a shift: they are higher by definition, and they decide.
            </p>
            <Notice>
              <p>
                Stays are taken from nights with today’s doctors, tests and ward beds; more beds alone may not shorten
                them. Patients keep one area.
              </p>
            </Notice>
          </section>
        </div>
        <WeekChances
          basis={basis}
          zone={zone}
          timeZone={timeZone}
          spans={spans}
          asIs={asIs}
          plan={inHand ?? drawn?.preview ?? null}
          planName={inHand ? 'the plan in hand' : `“${drawn?.plan.name ?? ''}”`}
        />
        {saved}
        <SmallestChangePanel previewer={previewer} zone={zone} spans={spans} changes={settled} onTry={tryBeds} />
        {feed}
      </div>
    </>
  );
}
