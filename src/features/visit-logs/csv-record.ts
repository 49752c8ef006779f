/** Fields as one record of RFC 4180, with its end. */
export function csvRecord(fields: readonly string[]): string {
  return `${fields.map(quoted).join(',')}\n`;
}

function quoted(field: string): string {
  return /[",\n\r]/.test(field) ? `"${field.replaceAll('"', '""')}"` : field;
}
