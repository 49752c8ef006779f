import { useSearchParams } from 'react-router-dom';
import { trackFilter, type TrackFilter } from '../../../shared/api/track-record.ts';

const usual: TrackFilter = trackFilter.parse({});

/** The filter that an address holds; a part that is not one counts as not given. */
export function filterOf(search: URLSearchParams): TrackFilter {
  const given = Object.fromEntries([...search].filter(([name]) => name in usual));
  const parsed = trackFilter.safeParse(given);
  if (parsed.success) return parsed.data;
  const faulty = new Set(parsed.error.issues.map((issue) => String(issue.path[0])));
  return trackFilter.parse(Object.fromEntries(Object.entries(given).filter(([name]) => !faulty.has(name))));
}

/** The address's query for a filter; what is as usual is left out. */
export function searchOf(filter: TrackFilter): URLSearchParams {
  const search = new URLSearchParams();
  for (const name of Object.keys(usual) as (keyof TrackFilter)[]) {
    if (filter[name] !== usual[name]) search.set(name, String(filter[name]));
  }
  return search;
}

/** The filter in the page's address, and how to change parts of it. */
export function useFilter(): [filter: TrackFilter, change: (parts: Partial<TrackFilter>) => void] {
  const [search, setSearch] = useSearchParams();
  const filter = filterOf(search);
  return [
    filter,
    (parts) => {
      setSearch(searchOf({ ...filter, ...parts }), { replace: true, preventScrollReset: true });
    },
  ];
}
