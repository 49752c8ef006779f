import { Link } from 'react-router-dom';
import type { PersonReply } from '../../../shared/api/people.ts';
import { roleNames } from '../../../shared/domain/permission.ts';
import { paths } from '../../app/paths.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatDate } from '../../lib/format.ts';

/** Everybody with what they hold now. */
export function PeopleList({ people, timeZone }: { people: readonly PersonReply[]; timeZone: string }) {
  return (
    <DataTable
      caption="People"
      captionHidden
      rows={people}
      rowKey={({ id }) => id}
      empty="Nobody fits. Clear the search, or invite the person by address."
      columns={[
        {
          key: 'name',
          header: 'Name',
          rowHeader: true,
          cell: ({ id, name, email }) => (
            <>
              <Link to={paths.person(id)} className="link">
                {name}
              </Link>
              <span className="block text-quiet font-semibold break-all text-ink2">{email}</span>
            </>
          ),
        },
        {
          key: 'roles',
          header: 'Roles now',
          cell: ({ roles, byGroups }) => {
            const held = [
              ...roles
                .filter(({ ended }) => !ended)
                .map(({ id, role, placeName, endsAt }) => ({
                  id,
                  text: `${roleNames[role]}, ${placeName}${endsAt === null ? '' : ` until ${formatDate(endsAt - 1, timeZone)}`}`,
                })),
              ...byGroups.map(({ id, role, placeName, claim }) => ({
                id,
                text: `${roleNames[role]}, ${placeName} (group ${claim})`,
              })),
            ];
            if (held.length === 0) return <span className="text-ink2">None</span>;
            return (
              <ul>
                {held.map(({ id, text }) => (
                  <li key={id}>{text}</li>
                ))}
              </ul>
            );
          },
        },
        {
          key: 'seen',
          header: 'Last sign-in',
          cell: ({ lastSignInAt }) => (lastSignInAt === null ? 'Invited, never' : formatDate(lastSignInAt, timeZone)),
        },
      ]}
    />
  );
}
