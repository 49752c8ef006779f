import { useState } from 'react';
import { Link, useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { Button } from '../components/Button.tsx';
import { Dialog } from '../components/Dialog.tsx';
import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { Skeleton, SkeletonLines } from '../components/Skeleton.tsx';
import { sayBriefState } from '../features/briefs/brief-words.ts';
import { DeliveryLog } from '../features/briefs/DeliveryLog.tsx';
import {
  briefHtmlAddress,
  useBrief,
  useDeliveries,
  useSendAgain,
  useSendBrief,
  useSendTest,
} from '../features/briefs/queries.ts';
import { useSession } from '../features/sign-in/session.ts';
import { formatDate, formatDateTime } from '../lib/format.ts';

/** /sites/:siteId/briefs/:briefId: one brief exactly as it was sent, or as it would be; for who may send, what became of it. */
export function BriefPage() {
  const { siteId = '', briefId = '' } = useParams();
  const site = useSession().sites.find(({ id }) => id === siteId);
  const timeZone = site?.timeZone ?? 'UTC';
  const maySend = site?.permissions.includes('brief:send') ?? false;
  const query = useBrief(siteId, briefId);
  const brief = query.data;
  return (
    <>
      <PageHead
        tab="Brief"
        title={brief ? `Weekly brief of ${formatDate(brief.composedAt, timeZone)}` : 'Weekly brief'}
        lede={
          brief ? (
            <p className="max-w-[58rem]">
              {sayBriefState(brief, timeZone)}. Composed {formatDateTime(brief.composedAt, timeZone)} by{' '}
              {brief.composedBy}
              {brief.approvedBy === null ? '' : `; approved by ${brief.approvedBy}`}.
            </p>
          ) : null
        }
        aside={
          <Link className="link inline-block min-h-11 py-2" to={paths.briefs(siteId)}>
            All briefs
          </Link>
        }
      />
      <div className="page-pad grid grid-cols-1 gap-6 pt-2">
        {query.error && !brief ? (
          <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
        ) : null}
        {query.isPending ? <Skeleton className="h-[70dvh] max-w-[40rem]" label="Loading the brief" /> : null}
        {brief ? (
          <>
            {maySend ? <SendActions siteId={siteId} briefId={briefId} state={brief.state} /> : null}
            <iframe
              // What it holds may run no script and reach nothing of the product.
              sandbox="allow-popups allow-popups-to-escape-sandbox"
              src={briefHtmlAddress(siteId, briefId)}
              title="The brief as a mail program shows it"
              className="h-[82dvh] w-full max-w-[40rem] border-0 border-t-[3px] border-ink bg-paper"
            />
            <details>
              <summary className="link min-h-11 cursor-pointer font-semibold text-ink2">The plain-text part</summary>
              <pre className="mt-2 max-w-[60rem] overflow-x-auto whitespace-pre-wrap bg-paper p-4">{brief.text}</pre>
            </details>
            <p className="max-w-[58rem] text-quiet text-ink2">
              Exactly what was composed; only the link to unsubscribe is each recipient’s own and is dead here.
            </p>
            {maySend ? <Deliveries siteId={siteId} briefId={briefId} timeZone={timeZone} /> : null}
          </>
        ) : null}
      </div>
    </>
  );
}

function SendActions({
  siteId,
  briefId,
  state,
}: {
  siteId: string;
  briefId: string;
  state: NonNullable<ReturnType<typeof useBrief>['data']>['state'];
}) {
  const send = useSendBrief(siteId, briefId);
  const test = useSendTest(siteId, briefId);
  const [asked, setAsked] = useState(false);
  const unsent = state === 'draft' || state === 'awaiting approval';
  return (
    <div className="grid gap-3">
      <div className="flex flex-wrap gap-3">
        {unsent ? <Button onClick={() => setAsked(true)}>Approve and send</Button> : null}
        <Button look="second" busy={test.isPending} busyText="Sending…" onClick={() => test.mutate(undefined)}>
          Send a test to me
        </Button>
      </div>
      {test.data ? (
        <Notice live title="A test is on its way">
          <p>To {test.data.address} alone. Its delivery stands below.</p>
        </Notice>
      ) : null}
      {test.error ? <ProblemNotice error={test.error} /> : null}
      <Dialog title="Send this brief?" open={asked} onClose={() => setAsked(false)}>
        <div className="grid gap-4">
          <p className="text-ink2">
            It goes to everybody who receives the brief now, each alone. It cannot be called back; whoever is removed or
            unsubscribes before their turn is passed over.
          </p>
          {send.error ? <ProblemNotice error={send.error} /> : null}
          <Button
            className="justify-self-start"
            busy={send.isPending}
            busyText="Sending…"
            onClick={() => send.mutate(undefined, { onSuccess: () => setAsked(false) })}
          >
            Approve and send
          </Button>
        </div>
      </Dialog>
    </div>
  );
}

function Deliveries({ siteId, briefId, timeZone }: { siteId: string; briefId: string; timeZone: string }) {
  const query = useDeliveries(siteId, briefId, true);
  const again = useSendAgain(siteId, briefId);
  return (
    <section className="grid grid-cols-1 gap-3" aria-labelledby="deliveries">
      <h2 id="deliveries" className="text-section">
        Deliveries
      </h2>
      {query.error && !query.data ? <ProblemNotice error={query.error} onRetry={() => void query.refetch()} /> : null}
      {query.isPending ? <SkeletonLines lines={3} label="Loading the deliveries" /> : null}
      {query.data ? (
        <DeliveryLog
          deliveries={query.data.deliveries}
          timeZone={timeZone}
          sendingAgain={again.isPending}
          error={again.error}
          onSendAgain={(deliveryId) => again.mutate(deliveryId)}
        />
      ) : null}
    </section>
  );
}
