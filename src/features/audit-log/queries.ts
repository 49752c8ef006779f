import { keepPreviousData, useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import {
  checkAuditChain,
  checkSiteAuditChain,
  exportAuditEvents,
  exportSiteAuditEvents,
  listAuditEvents,
  listSiteAuditEvents,
  redactAuditNote,
  redactSiteAuditNote,
} from '../../../shared/api/audit-log.ts';
import { localSecondsOf } from '../../../shared/domain/zoned-time.ts';
import { addressOf, call } from '../../lib/api-client.ts';
import { zoneOf } from '../../lib/format.ts';

/** The filter as it stands in the address: all text, empty where nothing is asked. */
export interface AuditFilter {
  event: string;
  actor: string;
  /** Days, YYYY-MM-DD. */
  from: string;
  until: string;
  /** Of the administrator's trail; elsewhere empty. */
  site: string;
}

const auditKey = (siteId: string | null) => ['audit', siteId] as const;

/** The start of a day, and for the last day the start of the next, as an instant. */
function dayStart(date: string, timeZone: string, add = 0): number | undefined {
  if (!/^\d{4}-\d{2}-\d{2}$/.test(date)) return undefined;
  const local = localSecondsOf(date) + add * 86_400;
  // Where the clocks are put forward at midnight the day starts an hour later.
  const zone = zoneOf(timeZone);
  return zone.fromLocal(local).at(0) ?? zone.fromLocal(local + 3600).at(0);
}

function toQuery(filter: AuditFilter, timeZone: string) {
  return {
    event: filter.event || undefined,
    actor: filter.actor || undefined,
    from: dayStart(filter.from, timeZone),
    until: dayStart(filter.until, timeZone, 1),
  };
}

/** A page of the trail; without a site the administrator's. */
export function useAuditEvents(siteId: string | null, filter: AuditFilter, before: string, timeZone: string) {
  return useQuery({
    queryKey: [...auditKey(siteId), 'events', filter, before, timeZone],
    placeholderData: keepPreviousData,
    queryFn: async ({ signal }) => {
      const query = { ...toQuery(filter, timeZone), before: /^\d+$/.test(before) ? Number(before) : undefined };
      return siteId === null
        ? call(listAuditEvents, { query: { ...query, siteId: filter.site || undefined }, signal })
        : { ...(await call(listSiteAuditEvents, { params: { siteId }, query, signal })), sites: [] };
    },
  });
}

/** Whether the trail is whole; asked once a page. */
export function useAuditChain(siteId: string | null) {
  return useQuery({
    queryKey: [...auditKey(siteId), 'chain'],
    staleTime: 60_000,
    queryFn: ({ signal }) =>
      siteId === null ? call(checkAuditChain, { signal }) : call(checkSiteAuditChain, { params: { siteId }, signal }),
  });
}

/** Where the browser fetches the filtered trail as a file. */
export function auditExportAddress(siteId: string | null, filter: AuditFilter, timeZone: string): string {
  const query = toQuery(filter, timeZone);
  return siteId === null
    ? addressOf(exportAuditEvents.path, {}, { ...query, siteId: filter.site || undefined })
    : addressOf(exportSiteAuditEvents.path, { siteId }, query);
}

export function useRedactNote(siteId: string | null) {
  const queryClient = useQueryClient();
  return useMutation({
    mutationFn: ({ eventId, reason }: { eventId: number; reason: string }) => {
      const kept = 'The text is still there.';
      return siteId === null
        ? call(redactAuditNote, { params: { eventId }, body: { reason }, kept })
        : call(redactSiteAuditNote, { params: { siteId, eventId }, body: { reason }, kept });
    },
    onSuccess: () => queryClient.invalidateQueries({ queryKey: auditKey(siteId) }),
  });
}
