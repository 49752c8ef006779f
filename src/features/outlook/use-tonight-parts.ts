import { useEffect, useMemo } from 'react';
import { isOutage } from '../../lib/api-error.ts';
import { keepTonight, readKeptTonight } from './kept-tonight.ts';
import type { TonightParts } from './kept-tonight.ts';
import { useCensus, useSite, useTonight } from './queries.ts';

/** True once a request of a part that is not there yet came to nothing. */
const isMissing = (query: { data: unknown; failureReason: unknown }) =>
  query.data === undefined && isOutage(query.failureReason);

/**
 * Site, outlook and census of Tonight. What was loaded is kept on this device, and read from there while the server
 * does not answer: `parts` then is the last good state and `fromDevice` true.
 * @param withoutServer the server is known not to answer: nothing is waited for.
 */
export function useTonightParts(personId: string, siteId: string, withoutServer: boolean) {
  const site = useSite(siteId);
  const tonight = useTonight(siteId);
  const census = useCensus(siteId);

  const loaded = useMemo<TonightParts | null>(
    () =>
      site.data && tonight.data && (census.data || census.error)
        ? { site: site.data, tonight: tonight.data, census: census.data ?? null }
        : null,
    [site.data, tonight.data, census.data, census.error],
  );
  useEffect(() => {
    // Without a census in it the kept one would stand empty where an older one has figures.
    if (loaded?.census && loaded.tonight.outlook) keepTonight(personId, siteId, loaded, tonight.dataUpdatedAt);
  }, [loaded, personId, siteId, tonight.dataUpdatedAt]);

  const fromDevice = loaded === null && (withoutServer || [site, tonight, census].some(isMissing));
  const kept = useMemo(() => (fromDevice ? readKeptTonight(personId, siteId) : null), [fromDevice, personId, siteId]);
  const failed = [site, tonight].find((query) => query.error && !query.data);
  return {
    parts: loaded ?? kept,
    /** When the parts were loaded, this device's clock, milliseconds. */
    loadedAt: loaded ? tonight.dataUpdatedAt : (kept?.loadedAt ?? 0),
    fromDevice: kept !== null,
    /** Why nothing can be shown. */
    error: kept || loaded ? null : (failed?.error ?? null),
    /** Why the newest refresh failed, if it did. */
    refreshError: tonight.error ?? (kept ? (tonight.failureReason ?? site.failureReason) : null),
    fetching: failed?.isFetching ?? false,
    refetch: () => {
      void site.refetch();
      void tonight.refetch();
      void census.refetch();
    },
  };
}
