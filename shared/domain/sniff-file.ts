const signatures: readonly [bytes: readonly number[], message: string][] = [
  [
    [0x50, 0x4b, 0x03, 0x04],
    'This is a spreadsheet workbook or a zip archive, not CSV. Open it and save the sheet as CSV (UTF-8).',
  ],
  [
    [0xd0, 0xcf, 0x11, 0xe0],
    'This is an old spreadsheet workbook (.xls), or one locked with a password. Open it and save the sheet as CSV (UTF-8) or as .xlsx without a password.',
  ],
  [[0x25, 0x50, 0x44, 0x46], 'This is a PDF document, not CSV. Export the visits as CSV.'],
  [[0xff, 0xfe], 'This file is saved as UTF-16. Save it as CSV (UTF-8).'],
  [[0xfe, 0xff], 'This file is saved as UTF-16. Save it as CSV (UTF-8).'],
];

/** True for the first bytes of a zip archive, as an .xlsx workbook is. */
export function isZip(start: Uint8Array): boolean {
  return start[0] === 0x50 && start[1] === 0x4b && start[2] === 0x03 && start[3] === 0x04;
}

/** True for the first bytes of a gzip file (RFC 1952). */
export function isGzip(start: Uint8Array): boolean {
  return start[0] === 0x1f && start[1] === 0x8b;
}

/**
 * Says why a file cannot be CSV, judging by its first bytes (up to some thousands).
 * @returns null if it may be text
 */
export function notText(start: Uint8Array): string | null {
  for (const [bytes, message] of signatures) {
    if (start.length >= bytes.length && bytes.every((byte, index) => start[index] === byte)) return message;
  }
  const isControl = (byte: number) => byte < 9 || (byte > 13 && byte < 32 && byte !== 27);
  return start.subarray(0, 8192).some(isControl)
    ? 'This is a binary file, not CSV. Export the visits as CSV (UTF-8).'
    : null;
}

/** The message for text whose bytes are not UTF-8. */
export const notUtf8 = 'The text is not encoded in UTF-8. Save the file as CSV (UTF-8) and try again.';
