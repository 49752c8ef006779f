import type { IdentifierKind } from './identifier-kind.ts';
import { RowNumbers, type ProblemRows } from './problem-rows.ts';
import { ValueTally } from './value-tally.ts';
import {
  notRecorded,
  rowProblems,
  type RowListener,
  type RowProblem,
  type VisitColumn,
  type VisitRow,
} from './visit-row.ts';

/** One kind of problem in one column: how many rows, and the first few by number. */
export interface ProblemCount {
  problem: RowProblem;
  column: VisitColumn | null;
  rows: number;
  /** Row numbers, 1 for the first row after the header. */
  examples: number[];
}

/** What a check found. Nothing in it tells of a single patient. */
export interface VisitReport {
  rows: number;
  goodRows: number;
  problemRows: number;
  problems: ProblemCount[];
  /** Good rows that equal another in every column: a warning only, since true twins exist. */
  identicalRows: number;
  /** First and last arrival and the last time of any kind in good rows, UTC seconds; null without good rows. */
  firstArrivalAt: number | null;
  lastArrivalAt: number | null;
  lastTimeAt: number | null;
  visitsByArea: { area: number; visits: number }[];
  /** Good rows in which each of these is recorded. */
  recorded: {
    departure: number;
    bedSpace: number;
    admissionDecision: number;
    disposition: number;
    byAmbulance: number;
  };
}

const examplesKept = 5;

/** Gathers the report while rows are read. */
export class VisitReportBuilder implements RowListener {
  private readonly now: number;
  private readonly problems = new Map<string, ProblemCount>();
  private readonly rowsOf = new Map<string, RowNumbers>();
  private readonly tallies = new Map<VisitColumn, ValueTally>();
  private readonly identified = new Map<string, { column: VisitColumn; kind: IdentifierKind; rows: number }>();
  private readonly byArea = new Map<number, number>();
  private readonly recorded = { departure: 0, bedSpace: 0, admissionDecision: 0, disposition: 0, byAmbulance: 0 };
  private marks = new Float64Array(4096);
  private rows = 0;
  private goodRows = 0;
  private firstArrivalAt = Infinity;
  private lastArrivalAt = -Infinity;
  private lastTimeAt = -Infinity;

  /** @param now UTC seconds */
  constructor(now: number) {
    this.now = now;
  }

  /** Begins the next row; the number is its own, 1 for the first after the header. */
  beginRow(): number {
    this.rows += 1;
    return this.rows;
  }

  problem(kind: RowProblem, column: VisitColumn | null): void {
    const key = `${kind}/${column ?? ''}`;
    let rows = this.rowsOf.get(key);
    if (!rows) this.rowsOf.set(key, (rows = new RowNumbers()));
    rows.add(this.rows);
    const known = this.problems.get(key);
    if (!known) this.problems.set(key, { problem: kind, column, rows: 1, examples: [this.rows] });
    else {
      known.rows += 1;
      if (known.examples.length < examplesKept) known.examples.push(this.rows);
    }
  }

  odd(column: VisitColumn, value: string): void {
    let tally = this.tallies.get(column);
    if (!tally) this.tallies.set(column, (tally = new ValueTally(this.now)));
    tally.add(value);
  }

  identifier(column: VisitColumn, kind: IdentifierKind): void {
    const key = `${column}/${kind}`;
    const known = this.identified.get(key);
    if (known) known.rows += 1;
    else this.identified.set(key, { column, kind, rows: 1 });
  }

  good(visit: VisitRow): void {
    if (this.goodRows === this.marks.length) {
      const larger = new Float64Array(this.marks.length * 2);
      larger.set(this.marks);
      this.marks = larger;
    }
    this.marks[this.goodRows] = markOf(visit);
    this.goodRows += 1;
    this.byArea.set(visit.area, (this.byArea.get(visit.area) ?? 0) + 1);
    if (visit.arrivalAt < this.firstArrivalAt) this.firstArrivalAt = visit.arrivalAt;
    if (visit.arrivalAt > this.lastArrivalAt) this.lastArrivalAt = visit.arrivalAt;
    if (visit.arrivalAt > this.lastTimeAt) this.lastTimeAt = visit.arrivalAt;
    if (visit.departureAt > this.lastTimeAt) this.lastTimeAt = visit.departureAt;
    if (visit.bedSpaceAt > this.lastTimeAt) this.lastTimeAt = visit.bedSpaceAt;
    if (visit.admissionDecisionAt > this.lastTimeAt) this.lastTimeAt = visit.admissionDecisionAt;
    if (!Number.isNaN(visit.departureAt)) this.recorded.departure += 1;
    if (!Number.isNaN(visit.bedSpaceAt)) this.recorded.bedSpace += 1;
    if (!Number.isNaN(visit.admissionDecisionAt)) this.recorded.admissionDecision += 1;
    if (visit.disposition !== notRecorded) this.recorded.disposition += 1;
    if (visit.byAmbulance !== notRecorded) this.recorded.byAmbulance += 1;
  }

  /** Every column in which something could identify a patient, with the kind and how many rows. */
  identifiers(): { column: VisitColumn; kind: IdentifierKind; rows: number }[] {
    const fromValues = [...this.tallies].flatMap(([column, tally]) =>
      tally.identifiers().map(({ kind, rows }) => ({ column, kind, rows })),
    );
    return [...this.identified.values(), ...fromValues];
  }

  /** Every problem row by number, in the order of the report's kinds. */
  problemRows(): ProblemRows[] {
    return this.sortedProblems().map(({ problem, column }) => ({
      problem,
      column,
      rows: (this.rowsOf.get(`${problem}/${column ?? ''}`) ?? new RowNumbers()).all(),
    }));
  }

  private sortedProblems(): ProblemCount[] {
    const order = Object.keys(rowProblems);
    return [...this.problems.values()].sort((a, b) => order.indexOf(a.problem) - order.indexOf(b.problem));
  }

  /** Cost: a sort of one number a row. */
  report(): VisitReport {
    const any = this.goodRows > 0;
    return {
      rows: this.rows,
      goodRows: this.goodRows,
      problemRows: this.rows - this.goodRows,
      problems: this.sortedProblems(),
      identicalRows: countRepeats(this.marks.subarray(0, this.goodRows)),
      firstArrivalAt: any ? this.firstArrivalAt : null,
      lastArrivalAt: any ? this.lastArrivalAt : null,
      lastTimeAt: any ? this.lastTimeAt : null,
      visitsByArea: [...this.byArea].map(([area, visits]) => ({ area, visits })).sort((a, b) => a.area - b.area),
      recorded: this.recorded,
    };
  }
}

let high = 0;
let low = 0;

/** FNV-1a, and a second mix of the same kind beside it, over 32-bit words. */
function mix(value: number): void {
  const word = Number.isNaN(value) ? 0x7fffffff : value;
  high = Math.imul(high ^ word, 0x01000193);
  low = Math.imul(low ^ (word + (high >>> 15)), 0x85ebca6b);
}

/** A number of 52 bits made of a visit's columns: equal rows have equal marks. */
function markOf(visit: VisitRow): number {
  high = 0x811c9dc5;
  low = 0x01000193;
  mix(visit.area);
  mix(visit.arrivalAt);
  mix(visit.bedSpaceAt);
  mix(visit.admissionDecisionAt);
  mix(visit.departureAt);
  mix(visit.disposition);
  mix(visit.byAmbulance);
  return (high >>> 6) * 67_108_864 + (low >>> 6);
}

function countRepeats(marks: Float64Array): number {
  const sorted = marks.slice().sort();
  let repeats = 0;
  for (let index = 1; index < sorted.length; index += 1) if (sorted[index] === sorted[index - 1]) repeats += 1;
  return repeats;
}
