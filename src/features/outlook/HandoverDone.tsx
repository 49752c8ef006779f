import type { NightLog } from '../../../shared/api/night-log.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { formatCount, formatTime } from '../../lib/format.ts';
import { entryInWords } from './NightLogList.tsx';
import type { Board } from './tonight-board.ts';

/** What fits on the page beside the areas. */
const entriesShown = 7;
const blankLines = 4;

/** What was done and by whom, the site's own escalation text of areas past their limit, and lines to write on. */
export function HandoverDone({ log, site, board }: { log: NightLog | null; site: Site; board: Board }) {
  // A census is in the table already; what people did is not.
  const done = log?.entries.filter((entry) => entry.kind !== 'census') ?? [];
  const shown = done.slice(-entriesShown);
  const censuses = log?.entries.filter((entry) => entry.kind === 'census') ?? [];
  const last = censuses.at(-1);
  const escalations = board.areas.filter((row) => row.pastTonight.length > 0 && row.area.escalationNote).slice(0, 2);
  return (
    <>
      <section className="mt-2">
        <h2 className="text-h2">What was done</h2>
        {log === null ? (
          <p className="font-bold">The log of tonight could not be loaded.</p>
        ) : shown.length === 0 ? (
          <p>Nothing is noted besides the census.</p>
        ) : (
          <ol className="text-label leading-snug">
            {done.length > shown.length ? (
              <li className="text-ink2">
                {formatCount(done.length - shown.length, 'earlier entry', 'earlier entries')} on the screen.
              </li>
            ) : null}
            {shown.map((entry) => (
              <li key={entry.id} className="grid grid-cols-[3rem_1fr]">
                <b>{formatTime(entry.at, site.timeZone)}</b>
                <span className="[overflow-wrap:anywhere]">
                  {entryInWords(entry, site.areas, site.timeZone)} <b className="whitespace-nowrap">{entry.by}</b>
                </span>
              </li>
            ))}
          </ol>
        )}
        {last ? (
          <p className="text-label text-ink2">
            {formatCount(censuses.length, 'census', 'censuses')} entered, the last at{' '}
            {formatTime(last.at, site.timeZone)} by {last.by}.
          </p>
        ) : null}
      </section>
      {escalations.map(({ area }) => (
        <p key={area.id} className="mt-1 text-label leading-snug">
          <b>{area.name}, the site’s own steps:</b> {area.escalationNote}
        </p>
      ))}
      <table className="mt-2 w-full border-collapse text-left text-label">
        <caption className="sr-only">To fill in by hand</caption>
        <thead>
          <tr>
            <th scope="col" className="w-[58%]">
              To do
            </th>
            <th scope="col" className="w-[27%] pl-3">
              Handed over to
            </th>
            <th scope="col" className="pl-3">
              Time
            </th>
          </tr>
        </thead>
        <tbody>
          {Array.from({ length: blankLines }, (_, line) => (
            <tr key={line} className="h-7">
              <td className="border-b border-ink2" />
              <td className="pl-3">
                <div className="h-7 border-b border-ink2" />
              </td>
              <td className="pl-3">
                <div className="h-7 border-b border-ink2" />
              </td>
            </tr>
          ))}
        </tbody>
      </table>
    </>
  );
}
