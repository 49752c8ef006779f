import { Link } from 'react-router-dom';
import type { NightLog, NightLogEntry } from '../../../shared/api/night-log.ts';
import type { CareArea, Site } from '../../../shared/api/sites.ts';
import { paths } from '../../app/paths.ts';
import { formatCount, formatTime } from '../../lib/format.ts';

/** What was done, in one sentence. */
export function entryInWords(entry: NightLogEntry, areas: readonly CareArea[], timeZone: string): string {
  const area = (areaId: string) => areas.find((candidate) => candidate.id === areaId);
  const name = (areaId: string) => area(areaId)?.name ?? 'An area no longer there';
  const time = (at: number) => formatTime(at, timeZone);
  if (entry.kind === 'acknowledgement') {
    const hours =
      entry.fromAt === entry.untilAt
        ? `at ${time(entry.fromAt)}`
        : `from ${time(entry.fromAt)} to ${time(entry.untilAt)}`;
    return `${name(entry.areaId)}, past its limit ${hours}, acknowledged: ${entry.note}`;
  }
  if (entry.kind === 'staffed beds') {
    const unit = area(entry.areaId)?.spaceKind ?? 'bed';
    const blocked = entry.blocked > 0 ? `, ${String(entry.blocked)} blocked,` : '';
    const from = entry.fromAt > entry.at ? ` from ${time(entry.fromAt)}` : '';
    return `${name(entry.areaId)} staffed with ${formatCount(entry.beds, unit)}${blocked}${from} until ${time(entry.untilAt)}: ${entry.reason}`;
  }
  const counts = entry.areas.map((one) => `${name(one.areaId)} ${String(one.present)}`);
  if (entry.undecidedWaiting !== null) counts.push(`area not decided ${String(entry.undecidedWaiting)}`);
  const taken = entry.at - entry.takenAt >= 300 ? ` of ${time(entry.takenAt)}` : '';
  return counts.length > 0 ? `Census${taken}: ${counts.join(', ')}` : `Arrivals since midnight counted`;
}

/** The log of a night: quiet, in time order; what the day did for it stands before the night's own. */
export function NightLogList({ log, site, current }: { log: NightLog; site: Site; current?: string }) {
  const before = log.entries.filter((entry) => entry.at < log.night.from);
  const during = log.entries.filter((entry) => entry.at >= log.night.from);
  return (
    <div className="grid gap-1">
      <Entries entries={before} {...{ site, current }} />
      {before.length > 0 && during.length > 0 ? (
        <p className="mt-1 text-label font-bold text-ink2">
          From {formatTime(log.night.from, site.timeZone)}, the night itself
        </p>
      ) : null}
      <Entries entries={during} {...{ site, current }} />
    </div>
  );
}

function Entries({
  entries,
  site,
  current,
}: {
  entries: readonly NightLogEntry[];
  site: Site;
  current: string | undefined;
}) {
  if (entries.length === 0) return null;
  return (
    <ol className="grid">
      {entries.map((entry) => (
        <li key={entry.id} className="grid grid-cols-[3.5rem_1fr] gap-x-3 border-b border-hair py-2 last:border-0">
          <span className="min-h-6 font-bold">
            {entry.outlookId && entry.outlookId !== current ? (
              <Link
                className="link inline-flex min-h-6 items-center"
                to={paths.tonightThen(site.id, entry.outlookId)}
                aria-label={`As it stood at ${formatTime(entry.at, site.timeZone)}`}
              >
                {formatTime(entry.at, site.timeZone)}
              </Link>
            ) : (
              formatTime(entry.at, site.timeZone)
            )}
          </span>
          <span className="min-w-0 text-ink2">
            <span className="[overflow-wrap:anywhere]">{entryInWords(entry, site.areas, site.timeZone)}</span>{' '}
            <span className="whitespace-nowrap text-ink3">{entry.by}</span>
          </span>
        </li>
      ))}
    </ol>
  );
}
