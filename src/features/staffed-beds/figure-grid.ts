/** A place in a grid, from 0. */
export interface Place {
  row: number;
  column: number;
}

/** Where one is in a grid, and from where a range was drawn. */
export interface Selection {
  active: Place;
  anchor: Place;
}

/** What a cell of a grid shows. */
export interface GridCell {
  /** Equal where the cell stands for one figure; both null where none stands. */
  low: number | null;
  high: number | null;
  /** A part of it has no figure. */
  hole: boolean;
  /** Stands small under the figure; `short`: the figure is below what is needed. */
  note: string | null;
  short: boolean;
  fault: string | null;
  changed: boolean;
  /** All that is to be said of it, read when it is reached. */
  told: string;
}

/** One figure for one cell. */
export interface CellEdit extends Place {
  beds: number | null;
}

/** The cells of a selection, row by row. */
export function placesOf({ active, anchor }: Selection): Place[] {
  const places: Place[] = [];
  for (let row = Math.min(active.row, anchor.row); row <= Math.max(active.row, anchor.row); row += 1) {
    for (
      let column = Math.min(active.column, anchor.column);
      column <= Math.max(active.column, anchor.column);
      column += 1
    ) {
      places.push({ row, column });
    }
  }
  return places;
}

/** Whether a cell lies within a selection. */
export function isWithin({ active, anchor }: Selection, { row, column }: Place): boolean {
  const between = (value: number, a: number, b: number) => value >= Math.min(a, b) && value <= Math.max(a, b);
  return between(row, active.row, anchor.row) && between(column, active.column, anchor.column);
}

interface Key {
  key: string;
  ctrl: boolean;
  shift: boolean;
}

/**
 * Where a key leads, in the habits of a spreadsheet: arrows, Home and End, Page Up and Down by a block of rows, with Ctrl
 * to the edges, with Shift as a range; Ctrl+A all, Shift+Space the row, Ctrl+Space the column.
 * @returns null for a key that leads nowhere
 */
export function moveSelection(
  selection: Selection,
  { key, ctrl, shift }: Key,
  size: { rows: number; columns: number },
): Selection | null {
  const { active } = selection;
  const last = { row: size.rows - 1, column: size.columns - 1 };
  if (ctrl && key.toLowerCase() === 'a') return { anchor: { row: 0, column: 0 }, active: last };
  if (key === ' ' && shift) return { anchor: { ...active, column: 0 }, active: { ...active, column: last.column } };
  if (key === ' ' && ctrl) return { anchor: { ...active, row: 0 }, active: { ...active, row: last.row } };
  const to = { ...active };
  if (key === 'ArrowUp') to.row = ctrl ? 0 : active.row - 1;
  else if (key === 'ArrowDown') to.row = ctrl ? last.row : active.row + 1;
  else if (key === 'ArrowLeft') to.column = ctrl ? 0 : active.column - 1;
  else if (key === 'ArrowRight') to.column = ctrl ? last.column : active.column + 1;
  else if (key === 'Home') Object.assign(to, ctrl ? { row: 0, column: 0 } : { column: 0 });
  else if (key === 'End') Object.assign(to, ctrl ? last : { column: last.column });
  else if (key === 'PageUp') to.row = active.row - 6;
  else if (key === 'PageDown') to.row = active.row + 6;
  else return null;
  to.row = Math.min(last.row, Math.max(0, to.row));
  to.column = Math.min(last.column, Math.max(0, to.column));
  return { active: to, anchor: shift ? selection.anchor : to };
}

/**
 * The edits that pasted figures make: a single figure fills the selection, a block goes from its first cell on.
 * @returns a text where the block does not fit: nothing is cut off in silence
 */
export function pasteEdits(
  figures: readonly (readonly (number | null)[])[],
  selection: Selection,
  size: { rows: number; columns: number },
): CellEdit[] | string {
  const places = placesOf(selection);
  if (figures.length === 1 && figures[0].length === 1)
    return places.map((place) => ({ ...place, beds: figures[0][0] }));
  const [first] = places;
  const rows = first.row + figures.length - size.rows;
  const columns = first.column + figures[0].length - size.columns;
  if (rows > 0 || columns > 0) {
    return `What was pasted is ${String(figures.length)} by ${String(figures[0].length)} cells and does not fit from here. Nothing was changed.`;
  }
  return figures.flatMap((line, row) =>
    line.map((beds, column) => ({ row: first.row + row, column: first.column + column, beds })),
  );
}

/** A typed figure; undefined for what is no whole number. Empty is a hole. */
export function readFigure(text: string): number | null | undefined {
  const trimmed = text.trim();
  if (trimmed === '') return null;
  return /^\d{1,4}$/.test(trimmed) ? Number(trimmed) : undefined;
}

/** A cell's figure as it is shown and copied: "26", "26–28", or nothing. */
export function figureText({ low, high }: Pick<GridCell, 'low' | 'high'>): string {
  if (low === null || high === null) return '';
  return low === high ? String(low) : `${String(low)}–${String(high)}`;
}
