import { localSecondsOf, localParts } from '../../../shared/domain/zoned-time.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { ProblemNotice } from '../../components/Notice.tsx';
import { Skeleton } from '../../components/Skeleton.tsx';
import { weekdayName } from '../../lib/format.ts';
import { NightLogList } from './NightLogList.tsx';
import { useNightLog } from './queries.ts';

/** "Tuesday night": a night carries the date on which it starts. */
export function nightName(date: string): string {
  return `${weekdayName(localParts(localSecondsOf(date)).weekday)} night`;
}

/** Under the board: what was done so far tonight, or in the night of an earlier instant. */
export function NightLogPanel({ site, at, current }: { site: Site; at?: number; current?: string }) {
  const log = useNightLog(site.id, at);
  return (
    <section aria-labelledby="night-log" className="page-pad mt-6 max-w-[52rem] print:hidden">
      <h2 id="night-log" className="text-h2">
        {at === undefined
          ? 'Done so far tonight'
          : log.data
            ? `Done towards ${nightName(log.data.night.date)}`
            : 'Done'}
      </h2>
      <div className="mt-2">
        {log.data ? (
          log.data.entries.length > 0 ? (
            <NightLogList log={log.data} site={site} {...(current === undefined ? {} : { current })} />
          ) : (
            <p className="text-ink2">
              Nothing yet. A census, a change of staffed beds and an acknowledgement are noted here for the next shift.
            </p>
          )
        ) : log.error ? (
          <ProblemNotice error={log.error} onRetry={() => void log.refetch()} retrying={log.isFetching} />
        ) : (
          <Skeleton className="h-16 w-full" label="Loading what was done" />
        )}
      </div>
    </section>
  );
}
