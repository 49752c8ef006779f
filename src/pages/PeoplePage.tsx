import { useState } from 'react';
import { useSearchParams } from 'react-router-dom';
import { Button } from '../components/Button.tsx';
import { TextField } from '../components/Field.tsx';
import { ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { GroupRoles } from '../features/people/GroupRoles.tsx';
import { InvitePerson } from '../features/people/InvitePerson.tsx';
import { PeopleList } from '../features/people/PeopleList.tsx';
import { usePeople } from '../features/people/queries.ts';
import { formatCount } from '../lib/format.ts';

/** /people: everybody who may sign in, and what they may do. */
export function PeoplePage() {
  const [search, setSearch] = useSearchParams();
  const asked = search.get('search') ?? '';
  const [text, setText] = useState(asked);
  const query = usePeople(asked);
  const { timeZone } = Intl.DateTimeFormat().resolvedOptions();
  const data = query.data;
  return (
    <>
      <PageHead
        tab="People"
        title={data ? formatCount(data.total, 'person', 'people') + (asked ? ' found' : '') : 'People'}
        lede={
          <p className="max-w-[58rem]">
            Whoever signs in with a hospital account appears here without a role. A role acts, and is gone, at the
            person’s next request.
          </p>
        }
      />
      <div className="page-pad grid grid-cols-1 gap-10 pt-2">
        <section aria-label="People" className="grid grid-cols-1 gap-4">
          <form
            role="search"
            className="flex max-w-xl items-end gap-4"
            onSubmit={(event) => {
              event.preventDefault();
              setSearch(text.trim() === '' ? {} : { search: text.trim() });
            }}
          >
            <div className="flex-1">
              <TextField
                label="Name or address"
                type="search"
                maxLength={80}
                value={text}
                onChange={(event) => setText(event.target.value)}
              />
            </div>
            <Button type="submit" look="second">
              Search
            </Button>
          </form>
          {query.error ? (
            <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
          ) : null}
          {query.isPending ? <SkeletonLines lines={6} label="Loading the list of people" /> : null}
          {data ? <PeopleList people={data.people} timeZone={timeZone} /> : null}
          {data && data.total > data.people.length ? (
            <p className="text-ink2">The first {data.people.length} are listed; search for the others.</p>
          ) : null}
        </section>
        <section className="grid grid-cols-1 gap-4" aria-labelledby="invite">
          <div>
            <h2 id="invite" className="text-section">
              Invite somebody
            </h2>
            <p className="max-w-[58rem] text-ink2">
              For a person who has not signed in yet. The first sign-in with this address binds them, if the hospital
              account has verified it.
            </p>
          </div>
          <InvitePerson />
        </section>
        {data ? (
          <section className="grid grid-cols-1 gap-4" aria-labelledby="by-group">
            <div>
              <h2 id="by-group" className="text-section">
                Roles by group
              </h2>
              <p className="max-w-[58rem] text-ink2">
                Everybody whom the hospital account puts into the group holds the role, beside those given by name. A
                person who joins or leaves the group is recognised at the next sign-in; a removed rule acts at once.
              </p>
            </div>
            <GroupRoles groupRoles={data.groupRoles} choices={data} timeZone={timeZone} />
          </section>
        ) : null}
      </div>
    </>
  );
}
