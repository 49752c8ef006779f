/** What a spreadsheet would take for a formula. */
const formula = /^[=+\-@\t\r]/;

function field(value: string | number | null): string {
  if (value === null) return '';
  if (typeof value === 'number') return String(value);
  const safe = formula.test(value) ? `'${value}` : value;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

/**
 * A table as CSV (RFC 4180): comment lines at the head, then names of columns, then rows.
 * @param head each on a line of its own after "# ": what the figures are, and the cautions that go with them
 */
export function csvText(
  head: readonly string[],
  columns: readonly string[],
  rows: readonly (readonly (string | number | null)[])[],
): string {
  const lines = head.map((line) => `# ${line.replaceAll(/[\r\n]+/g, ' ')}`);
  return [...lines, columns.map(field).join(','), ...rows.map((row) => row.map(field).join(','))]
    .map((line) => `${line}\r\n`)
    .join('');
}
