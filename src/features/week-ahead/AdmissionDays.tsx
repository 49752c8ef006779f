import type { Site } from '../../../shared/api/sites.ts';
import type { WeekOutlook } from '../../../shared/api/week-outlooks.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatDay, formatNumber } from '../../lib/format.ts';

type Columns = WeekOutlook['result']['department']['admissions']['admittedLeaving'];

const range = (columns: Columns, index: number) => (
  <span className="whitespace-nowrap">
    <b className="text-ink">{formatNumber(columns.p50[index])}</b> {formatNumber(columns.p2_5[index])} to{' '}
    {formatNumber(columns.p97_5[index])}
  </span>
);

/** A day's middle figure and its 80 and 95 % ranges along a common scale. */
function RangeBar({ columns, index, most }: { columns: Columns; index: number; most: number }) {
  const width = 150;
  const x = (value: number) => (value / most) * width;
  const band = (low: number, high: number, fill: string) => (
    <rect x={x(low)} y={3} width={Math.max(1, x(high) - x(low))} height={12} fill={fill} />
  );
  return (
    <svg width={width} height={18} viewBox={`0 0 ${String(width)} 18`} aria-hidden="true">
      <rect x={0} y={17} width={width} height={1} fill="var(--hair)" />
      {band(columns.p2_5[index], columns.p97_5[index], 'var(--g5)')}
      {band(columns.p10[index], columns.p90[index], 'var(--g3)')}
      {band(columns.p25[index], columns.p75[index], 'var(--g1)')}
      <rect x={x(columns.p50[index]) - 1} y={0} width={2} height={18} fill="var(--g-line)" />
    </svg>
  );
}

/** Admissions by day: who leaves the department for a ward, and who comes and will need one. */
export function AdmissionDays({ outlook, site, until }: { outlook: WeekOutlook; site: Site; until: number }) {
  const { days, department } = outlook.result;
  const { admittedLeaving, arrivalsToAdmit } = department.admissions;
  const rows = days.flatMap((day, index) => (day.from < until ? [index] : []));
  const most = Math.max(
    1,
    ...rows.map((index) => Math.max(admittedLeaving.p97_5[index], arrivalsToAdmit.p97_5[index])),
  );
  if (outlook.model.staysFrom) {
    return (
      <section aria-labelledby="admissions-title">
        <h2 id="admissions-title" className="text-section">
          Admissions by day
        </h2>
        <p className="mt-1 max-w-3xl text-ink2">
          Not known: the model in use is fitted on hourly counts, which do not say who was admitted. Load visits with
          dispositions to have them forecast.
        </p>
      </section>
    );
  }
  return (
    <section aria-labelledby="admissions-title">
      <h2 id="admissions-title" className="text-section">
        Admissions by day
      </h2>
      <p className="mb-2 max-w-3xl text-quiet text-ink2">
        Middle figure and 95&nbsp;% range of each day; the bars hold 50, 80 and 95&nbsp;%. Who leaves on a day often
        came the day before.
      </p>
      <DataTable<number>
        caption="Admissions, day by day"
        captionHidden
        rows={rows}
        rowKey={(index) => days[index].name}
        columns={[
          {
            key: 'day',
            header: 'Day',
            rowHeader: true,
            cell: (index) => (
              <span className="whitespace-nowrap">
                {index === 0 ? 'Rest of today' : formatDay(days[index].from, site.timeZone, 'short')}
              </span>
            ),
          },
          { key: 'leaving', header: 'Admitted patients leaving', cell: (index) => range(admittedLeaving, index) },
          {
            key: 'leaving bar',
            header: <span className="sr-only">Drawn</span>,
            cell: (index) => <RangeBar columns={admittedLeaving} index={index} most={most} />,
          },
          {
            key: 'coming',
            header: 'Arrivals expected to need admission',
            cell: (index) => range(arrivalsToAdmit, index),
          },
          {
            key: 'coming bar',
            header: <span className="sr-only">Drawn</span>,
            cell: (index) => <RangeBar columns={arrivalsToAdmit} index={index} most={most} />,
          },
        ]}
      />
    </section>
  );
}
