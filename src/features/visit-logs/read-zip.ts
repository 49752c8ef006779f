import { UnreadableFileError } from './unreadable-file.ts';

/** One file inside a zip archive: where its bytes lie and how they are packed. */
export interface ZipEntry {
  packedSize: number;
  size: number;
  /** 0 stored, 8 deflated. */
  method: number;
  /** Of its local header, from the start of the archive. */
  offset: number;
}

const endMark = 0x06054b50;
const entryMark = 0x02014b50;
const localMark = 0x04034b50;
/** The end record is 22 bytes, with a comment of 65,535 at most after it. */
const farthestEnd = 22 + 65_535;
const zip64 = 0xffffffff;

const damaged = () =>
  new UnreadableFileError('The workbook is damaged or cut short. Save it again, or save the sheet as CSV (UTF-8).');

/**
 * Lists the files of a zip archive by its central directory (PKWARE APPNOTE.TXT, 4.3). The bytes of the
 * files themselves are not touched: a sheet may be far larger than memory.
 * @throws UnreadableFileError if the archive is damaged or larger than 4 GB
 */
export async function listZip(file: Blob): Promise<Map<string, ZipEntry>> {
  const tailStart = Math.max(0, file.size - farthestEnd);
  const tail = await viewOf(file, tailStart, file.size);
  let end = tail.byteLength - 22;
  while (end >= 0 && tail.getUint32(end, true) !== endMark) end -= 1;
  if (end < 0) throw damaged();
  const size = tail.getUint32(end + 12, true);
  const start = tail.getUint32(end + 16, true);
  if (size === zip64 || start === zip64) throw new UnreadableFileError('The workbook is larger than 4 GB.');
  if (start + size > tailStart + end) throw damaged();
  const directory = await viewOf(file, start, start + size);
  const entries = new Map<string, ZipEntry>();
  const names = new TextDecoder();
  for (let at = 0; at + 46 <= directory.byteLength;) {
    if (directory.getUint32(at, true) !== entryMark) throw damaged();
    const nameLength = directory.getUint16(at + 28, true);
    const next = at + 46 + nameLength + directory.getUint16(at + 30, true) + directory.getUint16(at + 32, true);
    if (next > directory.byteLength) throw damaged();
    const name = names.decode(new Uint8Array(directory.buffer, directory.byteOffset + at + 46, nameLength));
    entries.set(name.replaceAll('\\', '/').replace(/^\//, '').toLowerCase(), {
      method: directory.getUint16(at + 10, true),
      packedSize: directory.getUint32(at + 20, true),
      size: directory.getUint32(at + 24, true),
      offset: directory.getUint32(at + 42, true),
    });
    at = next;
  }
  return entries;
}

/** The unpacked bytes of one file of the archive, as they are read. @param onBytes told of packed bytes as they go through */
export async function openZipEntry(
  file: Blob,
  entry: ZipEntry,
  onBytes: (bytes: number) => void = () => undefined,
): Promise<ReadableStream<Uint8Array<ArrayBuffer>>> {
  const local = await viewOf(file, entry.offset, entry.offset + 30);
  if (local.byteLength < 30 || local.getUint32(0, true) !== localMark) throw damaged();
  // Names and extra fields of the local header may be longer than those of the directory.
  const start = entry.offset + 30 + local.getUint16(26, true) + local.getUint16(28, true);
  const packed = file
    .slice(start, start + entry.packedSize)
    .stream()
    .pipeThrough(
      new TransformStream<Uint8Array<ArrayBuffer>, Uint8Array<ArrayBuffer>>({
        transform(piece, controller) {
          onBytes(piece.length);
          controller.enqueue(piece);
        },
      }),
    );
  if (entry.method === 0) return packed;
  if (entry.method !== 8) throw new UnreadableFileError('The workbook is packed in an unusual way. Save it again.');
  return packed.pipeThrough(new DecompressionStream('deflate-raw'));
}

async function viewOf(file: Blob, from: number, to: number): Promise<DataView> {
  return new DataView(await file.slice(from, to).arrayBuffer());
}
