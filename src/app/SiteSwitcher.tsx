import { Link, useNavigate } from 'react-router-dom';
import { Mark } from '../components/Mark.tsx';
import type { SessionSite } from '../features/sign-in/session.ts';
import { paths } from './paths.ts';

/** The name of the product over the name of the site; with several sites it is also where to change it. */
export function SiteSwitcher({ site, sites }: { site: SessionSite | undefined; sites: readonly SessionSite[] }) {
  const navigate = useNavigate();
  return (
    <div className="flex items-center gap-2.5 xl:w-[calc(var(--gutter)-1.5rem)]">
      <Link to={paths.home()} aria-label="Shoalmark, first page">
        <Mark className="h-9 w-9" />
      </Link>
      <div className="leading-tight">
        <div className="text-area -tracking-[0.01em] [font-weight:850]">Shoalmark</div>
        {site && sites.length > 1 ? (
          <select
            aria-label="Site"
            name="site"
            value={site.id}
            onChange={(event) => void navigate(paths.tonight(event.target.value))}
            className="-ml-1 min-h-6 max-w-52 cursor-pointer sm:max-w-48 rounded-field bg-transparent text-label font-semibold text-ink2 hover:text-ink"
          >
            {sites.map((candidate) => (
              <option key={candidate.id} value={candidate.id} className="bg-paper text-ink">
                {candidate.name}
              </option>
            ))}
          </select>
        ) : (
          <div className="text-label font-semibold text-ink2">{site?.name}</div>
        )}
      </div>
    </div>
  );
}
