import { exposureByLocalHour } from './hour-of-week.ts';
import { findEmptyRuns } from './find-empty-runs.ts';
import { findHeaps, type Heap } from './find-heaps.ts';
import { findLevelShifts } from './find-level-shifts.ts';
import { firstHourOfWeek, HourlyArrivals, weekOf } from './hourly-arrivals.ts';
import { instantOfLocal } from './shift-times.ts';
import type { VisitRow } from './visit-row.ts';
import type { Zone } from './zoned-time.ts';

/** A stretch of time, UTC seconds, its end left out. */
export interface TimeSpan {
  from: number;
  to: number;
}

/** Time columns whose minutes are looked at. */
export const heapedColumns = ['arrival_at', 'bed_space_at', 'admission_decision_at', 'departure_at'] as const;
export type HeapedColumn = (typeof heapedColumns)[number];

/** What a file's times say about the file. `area` is the number that its rows carry; null for the site. */
export interface FileStudy {
  /** Hours with implausibly no arrivals. */
  gaps: (TimeSpan & { area: number | null; expected: number })[];
  /** From this instant on another level, arrivals a week. */
  levelShifts: { area: number | null; at: number; before: number; after: number }[];
  heaps: (Heap & { column: HeapedColumn })[];
  /** Good rows that arrived when no loaded log counts. */
  newRows: number;
}

export interface StudyOptions {
  zone: Zone;
  /** Ends of the site's shifts, minutes of the local day. */
  shiftEnds: readonly number[];
  /** What loaded logs cover already. */
  covered: readonly TimeSpan[];
}

const mostGaps = 100;

/** Gathers arrivals by area and hour, and times by minute, while a file is read. */
export class FileStudyBuilder {
  private readonly options: StudyOptions;
  private readonly site = new HourlyArrivals();
  private readonly areas = new Map<number, HourlyArrivals>();
  private readonly minutes = heapedColumns.map(() => new Uint32Array(1440));
  private newRows = 0;
  private first = Infinity;
  private last = -Infinity;

  constructor(options: StudyOptions) {
    this.options = options;
  }

  add(visit: VisitRow): void {
    const { zone, covered } = this.options;
    const at = visit.arrivalAt;
    const localHour = Math.floor(zone.toLocal(at) / 3600);
    let area = this.areas.get(visit.area);
    if (!area) this.areas.set(visit.area, (area = new HourlyArrivals()));
    area.add(localHour);
    this.site.add(localHour);
    if (at < this.first) this.first = at;
    if (at > this.last) this.last = at;
    if (!covered.some((span) => at >= span.from && at < span.to)) this.newRows += 1;
    this.addMinute(0, at);
    this.addMinute(1, visit.bedSpaceAt);
    this.addMinute(2, visit.admissionDecisionAt);
    this.addMinute(3, visit.departureAt);
  }

  private addMinute(column: number, at: number): void {
    if (Number.isNaN(at)) return;
    const ofDay = Math.floor(this.options.zone.toLocal(at) / 60) % 1440;
    this.minutes[column][ofDay] += 1;
  }

  /** Null without a visit. Cost: linear in hours times areas. */
  study(): FileStudy | null {
    if (this.last < this.first) return null;
    const { zone } = this.options;
    const { firstLocalHour, hours } = exposureByLocalHour(zone, this.first, this.last + 1);
    const start = (index: number) => instantOfLocal(zone, (firstLocalHour + index) * 3600);
    const gaps: FileStudy['gaps'] = [];
    const levelShifts: FileStudy['levelShifts'] = [];
    const lost = new Uint8Array(hours.length);
    const series = [
      { area: null, arrivals: this.site },
      ...[...this.areas].sort((a, b) => a[0] - b[0]).map(([area, arrivals]) => ({ area, arrivals })),
    ];
    for (const { area, arrivals } of series) {
      const counts = arrivals.from(firstLocalHour, hours.length);
      // What the whole site lacks is told once, and not again for each area.
      const exposure = hours.map((hour, index) => (lost[index] === 1 ? 0 : hour));
      const runs = findEmptyRuns(counts, exposure, firstLocalHour);
      const missing = lost.slice();
      for (const { first, last, expected } of runs) {
        gaps.push({ area, from: start(first), to: start(last) + hours[last] * 3600, expected });
        missing.fill(1, first, last + 1);
      }
      if (area === null) lost.set(missing);
      const { totals, firstWeek } = weeklyTotals(counts, hours, missing, firstLocalHour);
      for (const { week, before, after } of findLevelShifts(totals)) {
        const at = instantOfLocal(zone, firstHourOfWeek(firstWeek + week) * 3600);
        levelShifts.push({ area, at, before, after });
      }
    }
    gaps.sort((a, b) => b.expected - a.expected);
    return {
      gaps: gaps.slice(0, mostGaps).sort((a, b) => a.from - b.from),
      levelShifts: levelShifts.sort((a, b) => a.at - b.at),
      heaps: heapedColumns.flatMap((column, index) =>
        findHeaps(this.minutes[index], this.options.shiftEnds).map((heap) => ({ ...heap, column })),
      ),
      newRows: this.newRows,
    };
  }
}

/** Arrivals of each week from Monday; NaN for one that the file holds in part or that has a gap. */
function weeklyTotals(
  counts: Float64Array,
  hours: Float64Array,
  missing: Uint8Array,
  firstLocalHour: number,
): { totals: number[]; firstWeek: number } {
  const firstWeek = weekOf(firstLocalHour);
  const weeks = weekOf(firstLocalHour + counts.length - 1) - firstWeek + 1;
  const totals = Array.from({ length: weeks }, (_, week) => {
    const from = firstHourOfWeek(firstWeek + week) - firstLocalHour;
    if (from < 0 || from + 168 > counts.length) return NaN;
    let total = 0;
    let lasted = 0;
    for (let index = from; index < from + 168; index += 1) {
      if (missing[index] === 1) return NaN;
      total += counts[index];
      lasted += hours[index];
    }
    // A week with a clock change lasts an hour more or less.
    return (total / lasted) * 168;
  });
  return { totals, firstWeek };
}
