import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { inflateSync } from 'node:zlib';

const tableEntryBytes = 20;

/**
 * Unpacks a WOFF 1.0 file into the TrueType file that it was made of.
 * Source: W3C, WOFF File Format 1.0, sections 4 and 5.
 */
export function unpackWoff(woff: Buffer): Buffer {
  if (woff.toString('latin1', 0, 4) !== 'wOFF') throw new RangeError('not a WOFF file');
  const tables = woff.readUInt16BE(12);
  const entries = Array.from({ length: tables }, (_, index) => {
    const at = 44 + index * tableEntryBytes;
    const [offset, packed, length] = [at + 4, at + 8, at + 12].map((place) => woff.readUInt32BE(place));
    const stored = woff.subarray(offset, offset + packed);
    const data = packed < length ? inflateSync(stored) : stored;
    return { tag: woff.subarray(at, at + 4), checksum: woff.subarray(at + 16, at + 20), data };
  });
  const power = 2 ** Math.floor(Math.log2(tables));
  const header = Buffer.alloc(12 + 16 * tables);
  woff.copy(header, 0, 4, 8);
  header.writeUInt16BE(tables, 4);
  header.writeUInt16BE(power * 16, 6);
  header.writeUInt16BE(Math.log2(power), 8);
  header.writeUInt16BE((tables - power) * 16, 10);
  const parts: Buffer[] = [header];
  let place = header.length;
  entries.forEach(({ tag, checksum, data }, index) => {
    const at = 12 + 16 * index;
    tag.copy(header, at);
    checksum.copy(header, at + 4);
    header.writeUInt32BE(place, at + 8);
    header.writeUInt32BE(data.length, at + 12);
    // Every table starts at a multiple of four bytes.
    const padded = Buffer.alloc(Math.ceil(data.length / 4) * 4);
    data.copy(padded);
    parts.push(padded);
    place += padded.length;
  });
  return Buffer.concat(parts);
}

let fonts: { name: string; data: Buffer }[] | null = null;

/**
 * Gives Nunito Sans, regular and bold, to a drawing of pictures, which reads fonts from files only: they are there while
 * `draw` runs and not a moment longer, so that no process, however it ends, leaves a folder behind for long.
 */
export function withMailFonts<Output>(draw: (fontFiles: string[]) => Output): Output {
  const require = createRequire(import.meta.url);
  fonts ??= ['400', '700'].map((weight) => {
    const woff = require.resolve(`@fontsource/nunito-sans/files/nunito-sans-latin-${weight}-normal.woff`);
    return { name: `nunito-sans-${weight}.ttf`, data: unpackWoff(readFileSync(woff)) };
  });
  const folder = mkdtempSync(join(tmpdir(), 'shoalmark-fonts-'));
  try {
    return draw(
      fonts.map(({ name, data }) => {
        const file = join(folder, name);
        writeFileSync(file, data);
        return file;
      }),
    );
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
