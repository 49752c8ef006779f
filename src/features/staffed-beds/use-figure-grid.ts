import { useEffect, useRef, useState } from 'react';
import type { ClipboardEvent, KeyboardEvent, RefObject } from 'react';
import { figureText, moveSelection, pasteEdits, placesOf, readFigure } from './figure-grid.ts';
import type { CellEdit, GridCell, Place, Selection } from './figure-grid.ts';
import { readPasted } from './read-pasted.ts';

const start: Place = { row: 0, column: 0 };

interface GridInput {
  tableRef: RefObject<HTMLTableElement | null>;
  size: { rows: number; columns: number };
  cellAt: (place: Place) => GridCell;
  /** Missing: the figures can be looked at only. */
  onEdit: ((edits: CellEdit[]) => void) | undefined;
  onUndo: (() => void) | undefined;
  onRedo: (() => void) | undefined;
}

/** Where one is in the grid, what is being typed, and what keys, clipboard and presses do. */
export function useFigureGrid({ tableRef, size, cellAt, onEdit, onUndo, onRedo }: GridInput) {
  const [selection, setSelection] = useState<Selection>({ active: start, anchor: start });
  /** What is being typed into the active cell; null: nothing is. */
  const [typed, setTyped] = useState<string | null>(null);
  const [said, setSaid] = useState('');
  const wantsFocus = useRef(false);
  const { active } = selection;
  const cellId = (place: Place) => `[data-cell="${String(place.row)}.${String(place.column)}"]`;

  // The focus follows the active cell, but is never taken from elsewhere on the page.
  useEffect(() => {
    if (!wantsFocus.current || typed !== null) return;
    wantsFocus.current = false;
    tableRef.current?.querySelector<HTMLElement>(cellId(active))?.focus();
  });

  function go(next: Selection) {
    wantsFocus.current = true;
    setSelection(next);
    setSaid('');
  }

  function apply(edits: CellEdit[], done: string) {
    onEdit?.(edits);
    setSaid(done);
  }

  /** Takes what was typed; false where it is no figure, which then stays to be mended. */
  function commit(): boolean {
    if (typed === null) return true;
    const beds = readFigure(typed);
    if (beds === undefined) {
      setSaid(`“${typed}” is not a whole number. Correct it, or press Escape to leave the cell as it was.`);
      return false;
    }
    const places = placesOf(selection);
    apply(
      places.map((place) => ({ ...place, beds })),
      places.length > 1 ? `${String(places.length)} cells set.` : '',
    );
    setTyped(null);
    wantsFocus.current = true;
    return true;
  }

  function handleKey(event: KeyboardEvent) {
    const { key, shiftKey: shift } = event;
    const ctrl = event.ctrlKey || event.metaKey;
    if (event.altKey) return;
    if (typed !== null) {
      if (key === 'Escape') {
        setTyped(null);
        setSaid('');
        wantsFocus.current = true;
      } else if (key === 'Enter' || key === 'Tab' || key === 'ArrowUp' || key === 'ArrowDown') {
        if (commit()) {
          const step =
            key === 'Tab'
              ? shift
                ? 'ArrowLeft'
                : 'ArrowRight'
              : key === 'Enter'
                ? shift
                  ? 'ArrowUp'
                  : 'ArrowDown'
                : key;
          // A range that was filled stays, so that it can be filled again.
          const moved =
            placesOf(selection).length > 1
              ? null
              : moveSelection(selection, { key: step, ctrl: false, shift: false }, size);
          if (moved) setSelection(moved);
        }
      } else return;
      event.preventDefault();
      return;
    }
    if (onEdit && ctrl && key.toLowerCase() === 'z') (shift ? onRedo : onUndo)?.();
    else if (onEdit && ctrl && key.toLowerCase() === 'y') onRedo?.();
    else if (onEdit && !ctrl && /^\d$/.test(key)) setTyped(key);
    else if (onEdit && (key === 'Enter' || key === 'F2')) setTyped(figureText(cellAt(active)));
    else if (onEdit && (key === 'Delete' || key === 'Backspace')) {
      const places = placesOf(selection);
      apply(
        places.map((place) => ({ ...place, beds: null })),
        places.length > 1 ? `${String(places.length)} cells cleared.` : 'Cleared.',
      );
    } else {
      const moved = moveSelection(selection, { key, ctrl, shift }, size);
      if (!moved) return;
      go(moved);
    }
    event.preventDefault();
  }

  function handleCopy(event: ClipboardEvent) {
    if (typed !== null) return;
    const rows = new Map<number, string[]>();
    for (const place of placesOf(selection))
      rows.set(place.row, [...(rows.get(place.row) ?? []), figureText(cellAt(place))]);
    event.clipboardData.setData('text/plain', [...rows.values()].map((line) => line.join('\t')).join('\n'));
    event.preventDefault();
    setSaid(`${String(placesOf(selection).length)} ${placesOf(selection).length === 1 ? 'cell' : 'cells'} copied.`);
  }

  function handlePaste(event: ClipboardEvent) {
    if (typed !== null || !onEdit) return;
    event.preventDefault();
    const pasted = readPasted(event.clipboardData.getData('text/plain'));
    if (pasted.figures === null) {
      setSaid(pasted.fault);
      return;
    }
    const edits = pasteEdits(pasted.figures, selection, size);
    if (typeof edits === 'string') setSaid(edits);
    else apply(edits, `${String(edits.length)} ${edits.length === 1 ? 'cell' : 'cells'} pasted.`);
  }

  /** A press chooses the cell, a second one on it types; with Shift it draws a range. */
  function handlePress(place: Place, shift: boolean) {
    if (typed !== null && !commit()) return;
    const again =
      !shift && active.row === place.row && active.column === place.column && placesOf(selection).length === 1;
    if (again && onEdit && tableRef.current?.contains(document.activeElement)) setTyped(figureText(cellAt(place)));
    else go({ active: place, anchor: shift ? selection.anchor : place });
  }

  /** Typing ends by going elsewhere: a figure is taken, anything else is let go. */
  function handleLeave() {
    if (typed === null) return;
    if (readFigure(typed) === undefined) {
      setTyped(null);
      setSaid(`“${typed}” is not a whole number: the cell stays as it was.`);
    } else {
      commit();
      wantsFocus.current = false;
    }
  }

  return {
    selection,
    typed,
    said,
    setTyped,
    /** A row or a column as a whole. */
    select: go,
    handleKey,
    handleCopy,
    handlePaste,
    handlePress,
    handleLeave,
    extendTo: (place: Place) => setSelection({ ...selection, active: place }),
  };
}
