import type { ReactNode } from 'react';
import type { Site } from '../../../shared/api/sites.ts';
import type { WeekOutlook } from '../../../shared/api/week-outlooks.ts';
import { formatChance } from '../../../shared/domain/risk-word.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatCount, formatNumber } from '../../lib/format.ts';
import { bedsInWords, waitRows } from './wait-rows.ts';
import { shiftName } from './week-board.ts';

const shownFirst = 8;
/** Where none is past the limit, the nearest few say how far it is. */
const nearest = 3;

/** How long arrivals wait for want of a bed space, against the site's limit: the shifts furthest past it, and what cannot be known. */
export function WeekWaits({
  outlook,
  site,
  until,
  setLimit,
}: {
  outlook: WeekOutlook;
  site: Site;
  until: number;
  /** Where the limit is kept, for those who keep it. */
  setLimit: ReactNode;
}) {
  const { waits } = outlook.result;
  const head = (
    <h2 id="waits-title" className="text-section">
      Waits for a bed space
    </h2>
  );
  if (!waits) {
    return (
      <section aria-labelledby="waits-title">
        {head}
        <p className="max-w-3xl text-ink2">
          {waits === undefined
            ? 'This forecast was made before waits were told; the next one tells them.'
            : 'Your site has stated no wait limit, so none is looked for.'}{' '}
          {setLimit}
        </p>
      </section>
    );
  }
  const rows = waitRows(outlook, site, until);
  const past = rows.filter(({ waits: { overLimit } }) => overLimit !== null && overLimit > waits.share);
  const unknown = outlook.result.areas.flatMap(({ areaId }, a) =>
    waits.areas[a] === null ? [site.areas.find(({ id }) => id === areaId)?.name ?? areaId] : [],
  );
  const limit = formatCount(waits.limitMinutes, 'minute');
  const share = formatChance(waits.share);
  return (
    <section aria-labelledby="waits-title">
      {head}
      <p className="mb-2 max-w-3xl text-quiet text-ink2">
        {rows.length === 0
          ? `Whether anybody waits longer than ${limit} cannot be known: the logs hold no bed-space times.`
          : past.length === 0
            ? `In no shift of these days are more than ${share} of arrivals expected to wait longer than ${limit}, the limit of your site.`
            : `In ${formatCount(past.length, 'shift')} more than ${share} of arrivals are expected to wait longer than ${limit}, the limit of your site.`}
        {rows.length > 0 && unknown.length > 0
          ? ` Not known for ${unknown.join(', ')}: their logs hold no bed-space times.`
          : ''}{' '}
        {setLimit}
        {rows.length > 0 && past.length === 0 ? ' The shifts nearest to it:' : ''}
      </p>
      {rows.length > 0 ? (
        <DataTable
          caption="Waits for a bed space by shift"
          captionHidden
          rows={past.length > 0 ? past.slice(0, shownFirst) : rows.slice(0, nearest)}
          rowKey={({ areaId, shift }) => `${areaId} ${String(shift.from)}`}
          columns={[
            {
              key: 'shift',
              header: 'Shift',
              rowHeader: true,
              cell: ({ shift }) => <span className="whitespace-nowrap">{shiftName(shift, site.timeZone)}</span>,
            },
            { key: 'area', header: 'Area', cell: ({ area }) => area },
            {
              key: 'over',
              header: `Longer than ${limit}`,
              figure: true,
              cell: ({ waits: { overLimit } }) => <b className="text-ink">{formatChance(overLimit ?? 0)}</b>,
            },
            {
              key: 'mean',
              header: 'Mean wait',
              figure: true,
              cell: ({ waits: { meanMinutes } }) => formatCount(Math.round(meanMinutes ?? 0), 'minute'),
            },
            {
              key: 'arrivals',
              header: 'Arrivals',
              figure: true,
              cell: ({ waits: { arrivals } }) => formatNumber(Math.round(arrivals)),
            },
            {
              key: 'beds',
              header: `To add for at most ${share}`,
              figure: true,
              cell: ({ waits: own }) => bedsInWords(own),
            },
          ]}
        />
      ) : null}
      {rows.length > 0 ? (
        <p className="mt-2 max-w-3xl text-quiet text-ink2">
          Waits for want of a bed space alone, patients taken in order of arrival: in truth less urgent patients wait
          longer, and a wait for a doctor or a test is not in it. These beds are for the wait limit; the gaps above are
          for the planning risk, and the larger of the two is what both need.
        </p>
      ) : null}
    </section>
  );
}
