import type { RowProblem, VisitColumn } from './visit-row.ts';

/** Every row of one kind of problem in one column, by number: 1 for the first row after the header. */
export interface ProblemRows {
  problem: RowProblem;
  /** Null where the row as a whole is wrong. */
  column: VisitColumn | null;
  rows: Uint32Array<ArrayBuffer>;
}

/** Row numbers, four bytes each, however many there will be. */
export class RowNumbers {
  private rows = new Uint32Array(16);
  private length = 0;

  add(row: number): void {
    if (this.length === this.rows.length) {
      const larger = new Uint32Array(this.rows.length * 2);
      larger.set(this.rows);
      this.rows = larger;
    }
    this.rows[this.length] = row;
    this.length += 1;
  }

  all(): Uint32Array<ArrayBuffer> {
    return this.rows.slice(0, this.length);
  }
}

export const problemRowsHeader = 'row,column,kind';

/**
 * Problem rows as CSV (RFC 4180): row number, column, kind of problem; never a value. Ascending by row.
 * @returns pieces of text, some thousands of lines each. Cost: a sort of all rows named.
 */
export function problemRowsCsv(kinds: readonly ProblemRows[]): string[] {
  const total = kinds.reduce((sum, { rows }) => sum + rows.length, 0);
  // Row and place of its kind in one number, so that one numeric sort puts them in order.
  const keys = new Float64Array(total);
  let at = 0;
  for (const [kind, { rows }] of kinds.entries()) {
    for (const row of rows) {
      keys[at] = row * 256 + kind;
      at += 1;
    }
  }
  keys.sort();
  const pieces = [`${problemRowsHeader}\r\n`];
  const linesAPiece = 5000;
  for (let from = 0; from < total; from += linesAPiece) {
    let piece = '';
    for (const key of keys.subarray(from, from + linesAPiece)) {
      const { problem, column } = kinds[key % 256];
      piece += `${String(Math.floor(key / 256))},${column ?? ''},${problem}\r\n`;
    }
    pieces.push(piece);
  }
  return pieces;
}
