import { Link, useNavigate, useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { roleNames } from '../../shared/domain/permission.ts';
import { Button } from '../components/Button.tsx';
import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { GiveRole } from '../features/people/GiveRole.tsx';
import { HeldRoles } from '../features/people/HeldRoles.tsx';
import { useEndSessions, usePerson, useWithdrawInvitation } from '../features/people/queries.ts';
import { formatCount, formatDateTime } from '../lib/format.ts';

/** /people/:personId: one person's roles and sessions. */
export function PersonPage() {
  const { personId = '' } = useParams();
  const query = usePerson(personId);
  const endSessions = useEndSessions(personId);
  const withdraw = useWithdrawInvitation();
  const navigate = useNavigate();
  const { timeZone } = Intl.DateTimeFormat().resolvedOptions();
  if (!query.data) {
    return (
      <>
        <PageHead tab="Person" title="Person" />
        <div className="page-pad max-w-3xl">
          {query.error ? (
            <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
          ) : (
            <SkeletonLines lines={5} label="Loading the person" />
          )}
        </div>
      </>
    );
  }
  const { person } = query.data;
  const invited = person.lastSignInAt === null;
  return (
    <>
      <PageHead
        tab={person.name}
        title={person.name}
        lede={
          <p>
            <span className="break-all">{person.email || 'No address'}</span>.{' '}
            {invited
              ? 'Invited; has not signed in yet.'
              : `Last signed in ${formatDateTime(person.lastSignInAt ?? 0, timeZone)}.`}
          </p>
        }
        aside={
          <Link to={paths.people()} className="link font-semibold">
            All people
          </Link>
        }
      />
      <div className="page-pad grid grid-cols-1 gap-10 pt-2">
        {!invited && !person.emailVerified ? (
          <Notice kind="caution" title="The hospital account has not verified this address.">
            <p>It proves nothing about who this is. Make sure by other means before you give a role.</p>
          </Notice>
        ) : null}
        <section className="grid grid-cols-1 gap-4" aria-labelledby="roles">
          <h2 id="roles" className="text-section">
            Roles
          </h2>
          <HeldRoles person={person} timeZone={timeZone} />
          {person.byGroups.length > 0 ? (
            <p className="text-ink2">
              By group besides:{' '}
              {person.byGroups
                .map(({ role, placeName, claim }) => `${roleNames[role]}, ${placeName} (${claim})`)
                .join('; ')}
              .
            </p>
          ) : null}
        </section>
        <section className="grid grid-cols-1 gap-4" aria-labelledby="give">
          <h2 id="give" className="text-section">
            Give a role
          </h2>
          <GiveRole personId={person.id} choices={query.data} timeZone={timeZone} />
        </section>
        {invited ? (
          <section className="grid grid-cols-1 justify-items-start gap-4" aria-labelledby="withdraw">
            <h2 id="withdraw" className="text-section">
              Withdraw the invitation
            </h2>
            <p className="text-ink2">The person and the roles above go; the audit trail keeps that they were there.</p>
            {withdraw.error ? <ProblemNotice error={withdraw.error} /> : null}
            <Button
              look="second"
              busy={withdraw.isPending}
              busyText="Withdrawing…"
              onClick={() => withdraw.mutate(person.id, { onSuccess: () => void navigate(paths.people()) })}
            >
              Withdraw the invitation
            </Button>
          </section>
        ) : (
          <section className="grid grid-cols-1 justify-items-start gap-4" aria-labelledby="sessions">
            <h2 id="sessions" className="text-section">
              Signed in on {formatCount(person.sessions, 'device')}
            </h2>
            {endSessions.error ? <ProblemNotice error={endSessions.error} /> : null}
            {endSessions.data ? (
              <p role="status" className="text-ink2">
                {formatCount(endSessions.data.ended, 'session')} ended.
              </p>
            ) : null}
            {person.sessions > 0 ? (
              <Button
                look="second"
                busy={endSessions.isPending}
                busyText="Ending…"
                onClick={() => endSessions.mutate(undefined)}
              >
                End every session
              </Button>
            ) : null}
          </section>
        )}
      </div>
    </>
  );
}
