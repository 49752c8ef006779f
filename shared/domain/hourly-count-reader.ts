import {
  countColumnNames,
  countProblems,
  mostAnHour,
  type CountColumn,
  type CountedFile,
  type CountPlaces,
  type CountProblem,
  type CountReading,
  type HourlyCount,
} from './hourly-count.ts';
import type { IdentifierKind } from './identifier-kind.ts';
import { ValueTally } from './value-tally.ts';
import type { FileFault } from './file-fault.ts';
import { hourText } from './local-hour-span.ts';
import type { Zone } from './zoned-time.ts';

/** What the reader stands on. */
export interface HourlyCountOptions {
  places: CountPlaces;
  reading: CountReading;
  zone: Zone;
  /** UTC seconds. */
  now: number;
  /** An hour without a row had no arrivals; otherwise every hour of every area has to have one. */
  missingIsNone: boolean;
  /** Names of the areas by code, for messages. */
  areaName(area: number): string;
}

/** A file has more rows than this only if it is no file of counts: 15 areas over 10 years. */
export const mostCountRows = 1_500_000;

const examplesKept = 5;
const wholeNumber = /^\d{1,9}$/;
const firstLocalDay = 10_957;

interface Cell {
  arrivals: number;
  departures: number | null;
  rows: number;
}

/** Gathers a file of hourly counts; a fault anywhere refuses the whole file, since an hour left out would look calm. */
export class HourlyCountReader {
  private readonly options: HourlyCountOptions;
  private readonly problems = new Map<
    string,
    { kind: CountProblem; column: CountColumn | null; rows: number[]; count: number }
  >();
  private readonly tallies = new Map<CountColumn, ValueTally>();
  private readonly births = new Map<CountColumn, number>();
  private readonly cells = new Map<number, Map<number, Cell>>();
  private row = 0;
  private first = Infinity;
  private last = -Infinity;

  constructor(options: HourlyCountOptions) {
    this.options = options;
  }

  get rows(): number {
    return this.row;
  }

  /** Reads the next record. @param width fields of the header */
  read(fields: readonly string[], width: number): void {
    this.row += 1;
    if (fields.length !== width) {
      this.problem('wrong number of fields', null);
      return;
    }
    const area = this.area(fields);
    const localHour = this.localHour(fields);
    const arrivals = this.count(fields, 'arrivals');
    const departures = this.count(fields, 'departures');
    if (area < 0 || Number.isNaN(localHour) || arrivals === undefined || departures === undefined) return;
    if (arrivals === null) {
      this.problem('count missing', 'arrivals');
      return;
    }
    this.take(area, localHour, arrivals, departures);
  }

  private take(area: number, localHour: number, arrivals: number, departures: number | null): void {
    const { zone, now } = this.options;
    const starts = zone.fromLocal(localHour * 3600);
    const ends = zone.fromLocal(localHour * 3600 + 3599);
    if (starts.length === 0 && ends.length === 0) {
      // Exports that fill in every hour of a day write a 0 for the one that was not.
      if (arrivals > 0 || (departures ?? 0) > 0) this.problem('hour skipped', 'hour');
      return;
    }
    if ((ends.at(-1) ?? starts[starts.length - 1]) + 1 > now) {
      this.problem('hour not over', 'hour');
      return;
    }
    let hours = this.cells.get(area);
    if (!hours) this.cells.set(area, (hours = new Map<number, Cell>()));
    const known = hours.get(localHour);
    if (known) {
      // The hour that comes twice may stand in one row or in two.
      if (known.rows >= 2 || Math.max(starts.length, ends.length) < 2) {
        this.problem('hour twice', 'hour');
        return;
      }
      known.rows += 1;
      known.arrivals += arrivals;
      known.departures = known.departures === null || departures === null ? null : known.departures + departures;
    } else hours.set(localHour, { arrivals, departures, rows: 1 });
    this.first = Math.min(this.first, localHour);
    this.last = Math.max(this.last, localHour);
  }

  private text(fields: readonly string[], column: CountColumn): string {
    const place = this.options.places[column];
    return place < 0 ? '' : fields[place].trim();
  }

  private area(fields: readonly string[]): number {
    const text = this.text(fields, 'care_area');
    if (text === '') {
      this.problem('area missing', 'care_area');
      return -1;
    }
    const area = this.options.reading.area(text);
    if (area < 0) {
      this.odd('care_area', text);
      this.problem('area unknown', 'care_area');
    }
    return area;
  }

  private localHour(fields: readonly string[]): number {
    const dateText = this.text(fields, 'local_date');
    const hourText = this.text(fields, 'hour');
    let day = NaN;
    if (dateText === '') this.problem('date missing', 'local_date');
    else {
      day = this.options.reading.day(dateText);
      if (Number.isNaN(day)) {
        this.odd('local_date', dateText);
        this.problem('date unreadable', 'local_date');
      } else if (day < firstLocalDay) {
        // No log reaches back so far: such a column holds dates of birth.
        this.births.set('local_date', (this.births.get('local_date') ?? 0) + 1);
        this.problem('date before 2000', 'local_date');
        day = NaN;
      }
    }
    if (hourText === '') {
      this.problem('hour missing', 'hour');
      return NaN;
    }
    const hour = this.options.reading.hour(hourText);
    if (Number.isNaN(hour)) {
      this.odd('hour', hourText);
      this.problem('hour unreadable', 'hour');
    }
    return day * 24 + hour;
  }

  /** Null where none is given, undefined where it cannot be read. */
  private count(fields: readonly string[], column: 'arrivals' | 'departures'): number | null | undefined {
    const text = this.text(fields, column);
    if (text === '') return null;
    if (!wholeNumber.test(text)) {
      this.odd(column, text);
      this.problem('count unreadable', column);
      return undefined;
    }
    const count = Number(text);
    if (count <= mostAnHour) return count;
    this.odd(column, text);
    this.problem('count too large', column);
    return undefined;
  }

  private problem(kind: CountProblem, column: CountColumn | null): void {
    const key = `${kind}/${column ?? ''}`;
    let known = this.problems.get(key);
    if (!known) this.problems.set(key, (known = { kind, column, rows: [], count: 0 }));
    known.count += 1;
    if (known.rows.length < examplesKept) known.rows.push(this.row);
  }

  private odd(column: CountColumn, value: string): void {
    let tally = this.tallies.get(column);
    if (!tally) this.tallies.set(column, (tally = new ValueTally(this.options.now)));
    tally.add(value);
  }

  /** Every column in which something could identify a patient, with the kind and how many rows. */
  identifiers(): { column: CountColumn; kind: IdentifierKind; rows: number }[] {
    return [
      ...[...this.births].map(([column, rows]) => ({ column, kind: 'date of birth' as const, rows })),
      ...[...this.tallies].flatMap(([column, tally]) =>
        tally.identifiers().map(({ kind, rows }) => ({ column, kind, rows })),
      ),
    ];
  }

  /**
   * Every fault, or what the file holds. Counts are handed on by area and hour, every hour from the first to the last.
   * Cost: linear in hours times areas.
   */
  finish(onCount?: (count: HourlyCount) => void): { faults: FileFault[] } | { counted: CountedFile } {
    const faults = this.rowFaults();
    const filled = faults.length === 0 ? this.findMissing(faults) : 0;
    if (faults.length > 0) return { faults };
    const areas = [...this.cells].sort((a, b) => a[0] - b[0]);
    const counted: CountedFile = {
      firstLocalHour: this.first,
      lastLocalHour: this.last,
      areas: [],
      filledHours: filled,
    };
    for (const [area, hours] of areas) {
      const hasDepartures = [...hours.values()].some(({ departures }) => departures !== null);
      const sum = { area, arrivals: 0, departures: hasDepartures ? 0 : null };
      for (let localHour = this.first; localHour <= this.last; localHour += 1) {
        if (!this.exists(localHour)) continue;
        const cell = hours.get(localHour) ?? { arrivals: 0, departures: hasDepartures ? 0 : null };
        sum.arrivals += cell.arrivals;
        if (sum.departures !== null) sum.departures += cell.departures ?? 0;
        onCount?.({ area, localHour, arrivals: cell.arrivals, departures: cell.departures });
      }
      counted.areas.push(sum);
    }
    return { counted };
  }

  private rowFaults(): FileFault[] {
    const order = Object.keys(countProblems);
    return [...this.problems.values()]
      .sort((a, b) => order.indexOf(a.kind) - order.indexOf(b.kind))
      .map(({ kind, column, rows, count }) => ({
        at: column === null ? 'row' : `${column} (${countColumnNames[column]})`,
        message: `${countProblems[kind]} ${inRows(count, rows)}.`,
      }));
  }

  /** Adds a fault for each area with hours that no row stands for, or with departures for some hours only. */
  private findMissing(faults: FileFault[]): number {
    let filled = 0;
    for (const [area, hours] of [...this.cells].sort((a, b) => a[0] - b[0])) {
      let missing = 0;
      let firstMissing = NaN;
      let without = 0;
      let total = 0;
      for (let localHour = this.first; localHour <= this.last; localHour += 1) {
        if (!this.exists(localHour)) continue;
        total += 1;
        const cell = hours.get(localHour);
        if (!cell) {
          if (missing === 0) firstMissing = localHour;
          missing += 1;
        } else if (cell.departures === null) without += 1;
      }
      const name = this.options.areaName(area);
      if (missing > 0 && !this.options.missingIsNone) {
        faults.push({
          at: name,
          message: `${missing.toLocaleString('en')} of ${total.toLocaleString('en')} hours have no row, the first: ${hourText(firstMissing)}. Write 0 where nobody came; what is not known belongs in no file.`,
        });
      }
      filled += missing;
      const given = total - missing - without;
      if (without > 0 && given > 0) {
        faults.push({
          at: name,
          message: `Departures are given for ${given.toLocaleString('en')} of ${(total - missing).toLocaleString('en')} hours. Give them for every hour of an area or for none.`,
        });
      }
    }
    return filled;
  }

  private readonly lasting = new Map<number, boolean>();

  /** False for an hour that the clock change skipped. */
  private exists(localHour: number): boolean {
    const { zone } = this.options;
    // Only days on which the clocks change have such hours.
    const day = Math.floor(localHour / 24);
    let plain = this.lasting.get(day);
    if (plain === undefined) {
      const near = day * 86_400 - zone.offsetAt(day * 86_400);
      plain = zone.changesBetween(near - 86_400, near + 2 * 86_400).length === 0;
      this.lasting.set(day, plain);
    }
    return plain || zone.fromLocal(localHour * 3600).length > 0 || zone.fromLocal(localHour * 3600 + 3599).length > 0;
  }
}

function inRows(count: number, examples: readonly number[]): string {
  return `${count.toLocaleString('en')} ${count === 1 ? 'row' : 'rows'}, ${count > examples.length ? 'the first: ' : 'row '}${examples.join(', ')}`;
}
