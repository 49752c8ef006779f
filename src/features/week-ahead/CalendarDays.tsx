import type { ReactNode } from 'react';
import type { Site } from '../../../shared/api/sites.ts';
import type { WeekOutlook } from '../../../shared/api/week-outlooks.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatCount, formatDay, formatNumber } from '../../lib/format.ts';

type Day = WeekOutlook['result']['calendar'][number];

/** A factor as a change: 1.12 is "+12 %". */
function change(factor: number): string {
  const percent = Math.round((factor - 1) * 100);
  return `${percent > 0 ? '+' : percent < 0 ? '−' : '±'}${formatNumber(Math.abs(percent))}\u00a0%`;
}

function basisOf({ basis, pastDays, kind }: Day): string {
  if (basis === 'stated') return 'Stated by your site; no such day in the log';
  if (basis === 'not known') return 'Unlike any day in the log: a guess';
  if (pastDays === 0) return `Learned from other ${kind === 'public holiday' ? 'public holidays' : 'days'}`;
  return `Learned from ${formatCount(pastDays, 'day')} in the log`;
}

/** Public holidays and the site's own days ahead, each with its effect on arrivals as a range. */
export function CalendarDays({ outlook, site, edit }: { outlook: WeekOutlook; site: Site; edit: ReactNode }) {
  const { calendar } = outlook.result;
  return (
    <section aria-labelledby="calendar-title">
      <h2 id="calendar-title" className="text-section">
        Calendar days ahead
      </h2>
      <p className="mb-2 max-w-3xl text-quiet text-ink2">
        The effect is on the whole day’s arrivals beside an ordinary day of that date; what days vary by anyway comes on
        top. Public holidays are those of {site.region ? `${site.country}, ${site.region}` : site.country}. {edit}
      </p>
      <DataTable
        caption="Calendar days in the fourteen days ahead"
        captionHidden
        rows={calendar}
        rowKey={(day) => `${day.date} ${day.name}`}
        empty="No public holiday and no day of your own calendar lies in the fourteen days ahead."
        columns={[
          {
            key: 'date',
            header: 'Date',
            rowHeader: true,
            cell: (day) => <span className="whitespace-nowrap">{formatDay(day.from, site.timeZone, 'short')}</span>,
          },
          { key: 'name', header: 'Day', cell: (day) => day.name },
          { key: 'kind', header: 'Kind', cell: (day) => day.kind },
          {
            key: 'effect',
            header: 'Arrivals, middle',
            figure: true,
            cell: (day) => <b className="text-ink">{change(day.effect)}</b>,
          },
          {
            key: 'range',
            header: '90 % range',
            figure: true,
            cell: (day) => (
              <span className="whitespace-nowrap">
                {change(day.low)} to {change(day.high)}
              </span>
            ),
          },
          {
            key: 'basis',
            header: 'On what ground',
            cell: (day) => (day.basis === 'learned' ? basisOf(day) : <b className="text-ink">{basisOf(day)}</b>),
          },
        ]}
      />
    </section>
  );
}
