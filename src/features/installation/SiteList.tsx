import { Link } from 'react-router-dom';
import type { InstallationSite } from '../../../shared/api/installation.ts';
import { paths } from '../../app/paths.ts';
import { DataTable } from '../../components/DataTable.tsx';

/** What a site still lacks before its people can work with it. */
function nextStep({ people, hasOperations, hasData }: InstallationSite): string {
  if (people === 0) return 'Give people roles: an operations manager first.';
  if (!hasOperations) return 'No operations manager holds a role by name: give one.';
  return hasData ? 'In use' : 'Its operations manager sets shifts, limits and plan; its steward loads a visit log.';
}

/** Every site with what comes next for it. */
export function SiteList({ sites }: { sites: readonly InstallationSite[] }) {
  return (
    <DataTable
      caption="Sites"
      captionHidden
      rows={sites}
      rowKey={({ id }) => id}
      empty="No site yet. Make a group below, then the first site."
      columns={[
        {
          key: 'name',
          header: 'Site',
          rowHeader: true,
          cell: ({ id, name, groupName }) => (
            <>
              <Link to={paths.installationSite(id)} className="link">
                {name}
              </Link>
              <span className="block text-quiet font-semibold text-ink2">{groupName}</span>
            </>
          ),
        },
        {
          key: 'zone',
          header: 'Time zone',
          cell: ({ timeZone, country, region }) =>
            `${timeZone.replaceAll('_', ' ')}, ${country}${region ? `-${region}` : ''}`,
        },
        { key: 'areas', header: 'Care areas', figure: true, cell: ({ areas }) => areas.length },
        { key: 'people', header: 'People', figure: true, cell: ({ people }) => people },
        { key: 'next', header: 'State', cell: nextStep },
      ]}
    />
  );
}
