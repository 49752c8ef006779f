/** What was pasted: figures by line and column (null: an empty cell), or why it was not taken. */
export type Pasted = { figures: (number | null)[][]; fault: null } | { figures: null; fault: string };

/**
 * Reads cells as a spreadsheet puts them on the clipboard: lines, with tabs between columns. Taken whole or not at all:
 * every cell must be a whole number or empty, and every line as long as the first.
 */
export function readPasted(text: string): Pasted {
  const lines = text.replace(/\r\n?/g, '\n').replace(/\n$/, '').split('\n');
  if (lines.every((line) => line.trim() === '')) return refused('Nothing was on the clipboard.');
  const cells = lines.map((line) => line.split('\t').map((cell) => cell.trim()));
  const figures: (number | null)[][] = [];
  for (const [index, line] of cells.entries()) {
    const place = `Line ${String(index + 1)} of what was pasted`;
    if (line.length !== cells[0].length) {
      return refused(`${place} has ${String(line.length)} cells, the first has ${String(cells[0].length)}.`);
    }
    const wrong = line.findIndex((cell) => cell !== '' && !/^\d{1,4}$/.test(cell));
    if (wrong >= 0) return refused(`${place}, cell ${String(wrong + 1)}: not a whole number.`);
    figures.push(line.map((cell) => (cell === '' ? null : Number(cell))));
  }
  return { figures, fault: null };
}

const refused = (fault: string): Pasted => ({ figures: null, fault: `${fault} Nothing was changed.` });
