import { useNavigate, useParams } from 'react-router-dom';
import type { Brief, BriefTally } from '../../shared/api/briefs.ts';
import { paths } from '../app/paths.ts';
import { Button, ButtonLink } from '../components/Button.tsx';
import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { BriefList } from '../features/briefs/BriefList.tsx';
import { OwnSubscription } from '../features/briefs/OwnSubscription.tsx';
import {
  useAddRecipient,
  useBriefs,
  useComposeBrief,
  useConfirmAddress,
  useRecipients,
  useRemoveRecipient,
  useSaveSettings,
  useSetSubscription,
} from '../features/briefs/queries.ts';
import { AddRecipient, RecipientList } from '../features/briefs/RecipientList.tsx';
import { ScheduleForm } from '../features/briefs/ScheduleForm.tsx';
import { useSession } from '../features/sign-in/session.ts';
import { formatCount, formatDateTime, formatDay } from '../lib/format.ts';

/** /sites/:siteId/briefs: the archive first, then one's own subscription; for who may send, schedule and recipients. */
export function BriefsPage() {
  const { siteId = '' } = useParams();
  const session = useSession();
  const site = session.sites.find(({ id }) => id === siteId);
  const timeZone = site?.timeZone ?? 'UTC';
  const maySend = site?.permissions.includes('brief:send') ?? false;
  const navigate = useNavigate();
  const query = useBriefs(siteId);
  const compose = useComposeBrief(siteId);
  const subscribe = useSetSubscription(siteId);
  const briefs = query.data?.briefs ?? [];
  const newest = briefs.find(({ state }) => state === 'sent' || state === 'sending');
  const waiting = briefs.find(({ state }) => state === 'awaiting approval');
  return (
    <>
      <PageHead
        tab="Briefs"
        title={query.data ? sayTitle(newest, waiting, timeZone) : 'Briefs'}
        lede={
          <p className="max-w-[58rem]">
            Once a week by mail: the week ahead, the last week in hindsight, and how the forecast did. Kept here exactly
            as it was sent.
          </p>
        }
      />
      <div className="page-pad grid grid-cols-1 gap-8 pt-2">
        {query.error && !query.data ? (
          <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
        ) : null}
        {query.isPending ? <SkeletonLines lines={5} label="Loading the briefs" /> : null}
        {query.data ? (
          <>
            {query.data.failure ? (
              <Notice kind="caution" title="The brief that was due could not be written">
                <p>
                  {formatDateTime(query.data.failure.at, timeZone)}: {query.data.failure.error}
                </p>
              </Notice>
            ) : null}
            <div className="flex flex-wrap items-center gap-4">
              {newest ? <ButtonLink to={paths.brief(siteId, newest.id)}>Read the newest brief</ButtonLink> : null}
              {maySend && waiting ? (
                <ButtonLink look="second" to={paths.brief(siteId, waiting.id)}>
                  Look at the one that waits
                </ButtonLink>
              ) : null}
              {maySend ? (
                <Button
                  look="second"
                  busy={compose.isPending}
                  busyText="Composing…"
                  onClick={() =>
                    compose.mutate(undefined, {
                      onSuccess: ({ id }) => void navigate(paths.brief(siteId, id)),
                    })
                  }
                >
                  Compose a draft now
                </Button>
              ) : null}
            </div>
            {compose.error ? <ProblemNotice error={compose.error} /> : null}
            <section className="grid grid-cols-1 gap-3" aria-labelledby="archive">
              <h2 id="archive" className="text-section">
                Archive
              </h2>
              <BriefList siteId={siteId} briefs={briefs} timeZone={timeZone} maySend={maySend} />
            </section>
            {query.data.subscription ? (
              <OwnSubscription
                subscription={query.data.subscription}
                saving={subscribe.isPending}
                error={subscribe.error}
                onChange={(subscribed) => subscribe.mutate(subscribed)}
              />
            ) : null}
            {maySend ? <Sending siteId={siteId} timeZone={timeZone} settings={query.data.settings} /> : null}
          </>
        ) : null}
      </div>
    </>
  );
}

function sayTitle(
  newest: (Brief & { tally: BriefTally }) | undefined,
  waiting: Brief | undefined,
  timeZone: string,
): string {
  if (waiting) return 'A brief waits for approval';
  if (!newest) return 'No brief has been sent yet';
  if (newest.state === 'sending') return 'A brief is being sent';
  return `The last brief went to ${formatCount(newest.tally.sent, 'recipient')} on ${formatDay(newest.sentAt ?? newest.composedAt, timeZone)}`;
}

/** Schedule and recipients, for who may send. */
function Sending({
  siteId,
  timeZone,
  settings,
}: {
  siteId: string;
  timeZone: string;
  settings: NonNullable<ReturnType<typeof useBriefs>['data']>['settings'];
}) {
  const save = useSaveSettings(siteId);
  const recipients = useRecipients(siteId, true);
  const add = useAddRecipient(siteId);
  const remove = useRemoveRecipient(siteId);
  const confirm = useConfirmAddress(siteId);
  const { nextDueAt, mayCoverGroup, groupName, ...schedule } = settings;
  return (
    <>
      <section className="grid grid-cols-1 gap-3" aria-labelledby="schedule">
        <h2 id="schedule" className="text-section">
          Schedule
        </h2>
        <ScheduleForm
          settings={schedule}
          nextDueAt={nextDueAt}
          mayCoverGroup={mayCoverGroup}
          groupName={groupName}
          timeZone={timeZone}
          saving={save.isPending}
          error={save.error}
          onSave={(body, done) => save.mutate(body, { onSuccess: done })}
        />
      </section>
      <section className="grid grid-cols-1 gap-4" aria-labelledby="recipients">
        <h2 id="recipients" className="text-section">
          Recipients
        </h2>
        {recipients.error && !recipients.data ? (
          <ProblemNotice error={recipients.error} onRetry={() => void recipients.refetch()} />
        ) : null}
        {recipients.isPending ? <SkeletonLines lines={3} label="Loading the recipients" /> : null}
        {recipients.data ? (
          <>
            <RecipientList
              recipients={recipients.data.recipients}
              timeZone={timeZone}
              removing={remove.isPending}
              error={remove.error}
              onRemove={(recipientId, done) => remove.mutate(recipientId, { onSuccess: done })}
              confirming={confirm.isPending}
              confirmError={confirm.error}
              onConfirm={(recipientId) => confirm.mutate(recipientId)}
            />
            <h3 className="text-h2">Add a recipient</h3>
            <AddRecipient
              people={recipients.data.people}
              adding={add.isPending}
              error={add.error}
              onAdd={(wish, done) => add.mutate(wish, { onSuccess: done })}
            />
          </>
        ) : null}
      </section>
    </>
  );
}
