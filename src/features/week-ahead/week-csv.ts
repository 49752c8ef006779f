import type { WeekAhead, WeekOutlook } from '../../../shared/api/week-outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { lentBeds } from '../../../shared/forecasting/lent-beds.ts';
import { weekGaps } from '../../../shared/forecasting/week-gaps.ts';
import type { CountColumns, NeedColumns, WeekSpan } from '../../../shared/forecasting/week-outlook-types.ts';
import { hourOfWeekName } from '../../components/HourOfWeekMap.tsx';
import { csvText } from '../../lib/csv-text.ts';
import { formatDateTime } from '../../lib/format.ts';

/** One file that the page can hand over. */
export interface WeekFile {
  /** What the list calls it. */
  title: string;
  fileName: string;
  text: () => string;
}

type Cell = string | number | null;

const countNames = ['mean', 'P2.5', 'P10', 'P25', 'median', 'P75', 'P90', 'P97.5'];
const needNames = ['mean', 'P2.5', 'P5', 'P10', 'P25', 'median', 'P75', 'P90', 'P95', 'P97.5'];

function counts(columns: CountColumns, at: number): number[] {
  const { mean, p2_5, p10, p25, p50, p75, p90, p97_5 } = columns;
  return [mean, p2_5, p10, p25, p50, p75, p90, p97_5].map((column) => column[at]);
}

function needs(columns: NeedColumns, at: number): number[] {
  const { mean, p2_5, p5, p10, p25, p50, p75, p90, p95, p97_5 } = columns;
  return [mean, p2_5, p5, p10, p25, p50, p75, p90, p95, p97_5].map((column) => column[at]);
}

/** What stands at the head of every file: whose figures, of when, and the cautions. */
export function csvHead(what: string, week: WeekAhead, outlook: WeekOutlook, site: Site): string[] {
  const { result } = outlook;
  return [
    `Shoalmark, week ahead, ${site.name}: ${what}`,
    `Computed ${formatDateTime(outlook.issuedAt, site.timeZone)} (${site.timeZone}) on staffed-bed plan version ${String(outlook.planVersion)}, engine ${result.engineVersion}, seed ${String(outlook.seed)}, ${String(result.replications)} replications; times are local`,
    'Planning aid. Not for decisions about any individual patient. Follow your hospital’s clinical governance, escalation policy and local law; a licensed clinician’s judgement comes first.',
    'A forecast is a range. Act on the percentile your policy names, not on the median alone. It does not foresee a major incident or a sudden closure: use your incident plan.',
    `A low chance is not a reason to staff below your safe minimum. Bed figures are for a planning risk of ${String(Math.round(result.planningRisk * 100))} %.`,
    ...week.cautions.map(({ text }) => text),
  ];
}

/** Every table of the page as a file, the days shown and no more. */
export function weekFiles(week: WeekAhead, outlook: WeekOutlook, site: Site, until: number): WeekFile[] {
  const { result } = outlook;
  const at = (instant: number): string => formatDateTime(instant, site.timeZone);
  const nameOf = (areaId: string): string => site.areas.find(({ id }) => id === areaId)?.name ?? areaId;
  const areaNames = result.areas.map(({ areaId }) => nameOf(areaId));
  const slug = site.name.toLowerCase().replaceAll(/[^a-z0-9]+/g, '-');
  const file = (title: string, name: string, columns: string[], rows: () => Cell[][]): WeekFile => ({
    title,
    fileName: `${slug}-week-ahead-${name}.csv`,
    text: () => csvText(csvHead(title, week, outlook, site), columns, rows()),
  });
  const shown = (spans: readonly WeekSpan[]): number[] => spans.flatMap((span, i) => (span.from < until ? [i] : []));
  const arrivals = (title: string, name: string, table: keyof typeof result.arrivals): WeekFile =>
    file(title, name, ['from', 'to', 'name', 'whose', ...countNames], () => {
      const { spans, total, areas, ambulance } = result.arrivals[table];
      return shown(spans).flatMap((i) => {
        const span = [at(spans[i].from), at(spans[i].to), spans[i].name];
        return [
          [...span, 'whole department', ...counts(total, i)],
          ...areas.map((own, a) => [...span, areaNames[a], ...counts(own, i)]),
          ...(ambulance ? [[...span, 'by ambulance', ...counts(ambulance, i)]] : []),
        ];
      });
    });

  return [
    file(
      'Gaps between need and plan, worst first',
      'gaps',
      [
        'shift',
        'from',
        'to',
        'area',
        'planned (fewest)',
        'planned (most)',
        'to add',
        'of which do not exist',
        'could be lent',
        'chance of any shortfall',
        'chance with every space',
        'nurse hours',
        'last chance to book',
      ],
      () => {
        const gaps = weekGaps(result, week.now, until);
        const lent = lentBeds(result, gaps, site.areas);
        return gaps.map(({ areaId, shift, need }, g) => [
          shift.name,
          at(shift.from),
          at(shift.to),
          nameOf(areaId),
          need.staffedLeast,
          need.staffedMost,
          need.bedsToAdd,
          need.bedsThatDoNotExist,
          lent[g].map((one) => `${String(one.beds)} by ${nameOf(one.areaId)}`).join('; '),
          need.someTime,
          need.someTimeWithEverySpace,
          need.nurseHours,
          at(need.lastChanceAt),
        ]);
      },
    ),
    file(
      'Every shift: need at its peak against the plan',
      'shifts',
      [
        'shift',
        'from',
        'to',
        'area',
        ...needNames,
        'planned (fewest)',
        'planned (most)',
        'headroom at P90',
        'beds for the planning risk',
        'to staff in steps',
        'to add',
        'chance of any shortfall',
        'share of arrivals past the wait limit',
        'mean wait, minutes',
        'to add for the wait limit',
        'last chance to book',
      ],
      () =>
        shown(result.shifts).flatMap((s) =>
          result.areas.map(({ areaId, shifts }, a): Cell[] => {
            const waits = result.waits?.areas[a]?.[s];
            const shift = result.shifts[s];
            const { peak, ...need } = shifts[s];
            return [
              shift.name,
              at(shift.from),
              at(shift.to),
              nameOf(areaId),
              ...[
                peak.mean,
                peak.p2_5,
                peak.p5,
                peak.p10,
                peak.p25,
                peak.p50,
                peak.p75,
                peak.p90,
                peak.p95,
                peak.p97_5,
              ],
              need.staffedLeast,
              need.staffedMost,
              need.headroom,
              need.bedsForPlanningRisk,
              need.bedsToStaff,
              need.bedsToAdd,
              need.someTime,
              waits?.overLimit ?? 'not known',
              waits?.meanMinutes ?? 'not known',
              waits ? (waits.bedsToAdd ?? 'every space is not enough') : 'not known',
              at(need.lastChanceAt),
            ];
          }),
        ),
    ),
    file(
      'Need hour by hour',
      'need-by-hour',
      ['at', 'area', ...needNames, 'staffed', 'chance of shortfall', 'chance within the hour'],
      () =>
        result.hours.flatMap((hour, h) =>
          hour > until
            ? []
            : result.areas.map((area): Cell[] => [
                at(hour),
                nameOf(area.areaId),
                ...needs(area.need, h),
                area.staffed[h],
                area.shortfall[h],
                area.shortfallWithin[h],
              ]),
        ),
    ),
    arrivals('Arrivals hour by hour', 'arrivals-by-hour', 'hours'),
    arrivals('Arrivals by shift', 'arrivals-by-shift', 'shifts'),
    arrivals('Arrivals by day', 'arrivals-by-day', 'days'),
    file('Admissions by day', 'admissions-by-day', ['day', 'whose', 'figure', ...countNames], () =>
      // A model fitted on hourly counts knows no admissions; no rows are better than noughts.
      (outlook.model.staysFrom ? [] : shown(result.days)).flatMap((d) => {
        const of = (whose: string, own: typeof result.department.admissions): Cell[][] => [
          [result.days[d].name, whose, 'admitted patients leaving', ...counts(own.admittedLeaving, d)],
          [result.days[d].name, whose, 'arrivals expected to need admission', ...counts(own.arrivalsToAdmit, d)],
        ];
        return [
          ...of('whole department', result.department.admissions),
          ...result.areas.flatMap((area) => of(nameOf(area.areaId), area.admissions)),
        ];
      }),
    ),
    file(
      'Typical arrivals by hour of the week',
      'hour-of-week',
      ['hour of week', ...areaNames, 'whole department'],
      () =>
        Array.from({ length: 168 }, (_, hour): Cell[] => {
          const own = result.ordinaryWeek.map((rates) => rates[hour]);
          return [hourOfWeekName(hour), ...own, Math.round(1000 * own.reduce((sum, rate) => sum + rate, 0)) / 1000];
        }),
    ),
    file(
      'Calendar days and their effect on arrivals',
      'calendar',
      ['date', 'name', 'kind', 'effect (factor)', '90 % range from', 'to', 'basis', 'days in the log'],
      () =>
        result.calendar.map((day) => [
          day.date,
          day.name,
          day.kind,
          Math.round(day.effect * 1000) / 1000,
          Math.round(day.low * 1000) / 1000,
          Math.round(day.high * 1000) / 1000,
          day.basis,
          day.pastDays,
        ]),
    ),
    ...(week.lastWeek
      ? [
          file(
            'Last week: forecast against what came',
            'last-week',
            ['day', 'P2.5', 'P10', 'P25', 'median', 'P75', 'P90', 'P97.5', 'came'],
            () =>
              (week.lastWeek?.days ?? []).map((day) => [
                day.date,
                day.p2_5,
                day.p10,
                day.p25,
                day.p50,
                day.p75,
                day.p90,
                day.p97_5,
                day.count,
              ]),
          ),
        ]
      : []),
  ];
}
