import type { Site } from '../../../shared/api/sites.ts';
import type { LastWeek as Past, WeekAhead } from '../../../shared/api/week-outlooks.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatDateTime, formatDay, formatNumber } from '../../lib/format.ts';

type Day = Past['days'][number];

/** Where a count fell, in words. */
function placeOf(day: Day): string {
  const { count } = day;
  if (count === null) return 'no log speaks of it';
  if (count < day.p2_5) return 'below the 95 % range';
  if (count > day.p97_5) return 'above the 95 % range';
  if (count >= day.p25 && count <= day.p75) return 'within the 50 % range';
  if (count >= day.p10 && count <= day.p90) return 'within the 80 % range';
  return 'within the 95 % range';
}

/** How often ranges held, in one sentence. */
export function lastWeekInWords(days: readonly Day[]): string {
  const known = days.filter(({ count }) => count !== null);
  if (known.length === 0) return 'No accepted log speaks of last week yet.';
  const within = known.filter(({ count, p10, p90 }) => count !== null && count >= p10 && count <= p90).length;
  return `${formatNumber(within)} of ${formatNumber(known.length)} days fell within the 80 % range; about ${formatNumber(Math.round(known.length * 0.8))} would be expected to.`;
}

function Place({ day, low, high }: { day: Day; low: number; high: number }) {
  const width = 220;
  const x = (value: number) => ((value - low) / (high - low)) * width;
  const band = (from: number, to: number, fill: string) => (
    <rect x={x(from)} y={3} width={Math.max(1, x(to) - x(from))} height={14} fill={fill} />
  );
  return (
    <svg width={width} height={20} viewBox={`0 0 ${String(width)} 20`} aria-hidden="true">
      {band(day.p2_5, day.p97_5, 'var(--f3)')}
      {band(day.p10, day.p90, 'var(--f2)')}
      {band(day.p25, day.p75, 'var(--f1)')}
      {day.count === null ? null : <rect x={x(day.count) - 1.5} y={0} width={3} height={20} fill="var(--ink)" />}
    </svg>
  );
}

/** The forecast that stood a week ago against what came. */
export function LastWeek({ week, site }: { week: WeekAhead; site: Site }) {
  const { lastWeek } = week;
  if (!lastWeek) {
    return (
      <section aria-labelledby="last-week-title">
        <h2 id="last-week-title" className="text-section">
          Last week against actual
        </h2>
        <p className="max-w-3xl text-ink2">
          No forecast of the week was issued a week ago, so there is nothing to compare yet. One is issued each day;
          from the eighth day on last week’s stands here. Where the track record has been recomputed, one made
          afterwards from what was known then stands here before.
        </p>
      </section>
    );
  }
  const { days } = lastWeek;
  const low = Math.min(...days.map((day) => Math.min(day.p2_5, day.count ?? Infinity)));
  const high = Math.max(...days.map((day) => Math.max(day.p97_5, day.count ?? 0)), low + 1);
  return (
    <section aria-labelledby="last-week-title">
      <h2 id="last-week-title" className="text-section">
        Last week against actual
      </h2>
      <p className="mb-2 max-w-3xl text-quiet text-ink2">
        {lastWeekInWords(days)}{' '}
        {lastWeek.recomputed
          ? `No forecast had been issued then: this one was made afterwards, from the visits known on ${formatDateTime(lastWeek.issuedAt, site.timeZone)} alone.`
          : `Forecast of ${formatDateTime(lastWeek.issuedAt, site.timeZone)}, exactly as it was issued.`}{' '}
        The stroke is what came.
      </p>
      <DataTable
        caption="Last week: arrivals forecast and what came"
        captionHidden
        rows={days}
        rowKey={(day) => day.date}
        columns={[
          {
            key: 'day',
            header: 'Day',
            rowHeader: true,
            cell: (day) => <span className="whitespace-nowrap">{formatDay(day.from, site.timeZone, 'short')}</span>,
          },
          { key: 'middle', header: 'Forecast', figure: true, cell: (day) => formatNumber(day.p50) },
          {
            key: 'range',
            header: '95 % range',
            figure: true,
            cell: (day) => (
              <span className="whitespace-nowrap">
                {formatNumber(day.p2_5)} to {formatNumber(day.p97_5)}
              </span>
            ),
          },
          {
            key: 'count',
            header: 'Came',
            figure: true,
            cell: (day) => <b className="text-ink">{day.count === null ? '–' : formatNumber(day.count)}</b>,
          },
          {
            key: 'drawn',
            header: <span className="sr-only">Drawn</span>,
            cell: (day) => <Place day={day} low={low} high={high} />,
          },
          { key: 'place', header: 'Where it fell', cell: placeOf },
        ]}
      />
    </section>
  );
}
