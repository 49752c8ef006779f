import { isGzip, notText } from '../../../shared/domain/sniff-file.ts';
import { UnreadableFileError } from './unreadable-file.ts';

/** How the bytes of a file are to be read. */
export type Encoding = 'utf-8' | 'windows-1252';

/** Thrown where bytes are not of the encoding given. */
export class WrongEncodingError extends Error {
  override name = 'WrongEncodingError';
}

/**
 * Reads a file as text, piece by piece, unpacked if it is gzipped.
 * @param onText gets each piece; reading goes on once it resolves, and stops when it resolves to false
 * @param onBytes told how many bytes of the file were read
 */
export async function decodeFile(
  file: Blob,
  encoding: Encoding,
  onText: (text: string) => boolean | Promise<boolean>,
  onBytes: (bytes: number) => void,
): Promise<void> {
  const start = new Uint8Array(await file.slice(0, 8192).arrayBuffer());
  const packed = isGzip(start);
  if (!packed) {
    const reason = notText(start);
    if (reason !== null) throw new UnreadableFileError(reason);
  }
  const counted = file.stream().pipeThrough(
    new TransformStream<Uint8Array<ArrayBuffer>, Uint8Array<ArrayBuffer>>({
      transform(piece, controller) {
        onBytes(piece.length);
        controller.enqueue(piece);
      },
    }),
  );
  const bytes = packed ? counted.pipeThrough(new DecompressionStream('gzip')) : counted;
  const decoder = new TextDecoder(encoding, { fatal: true });
  const reader = bytes.getReader();
  let first = packed;
  try {
    for (;;) {
      const { done, value } = await readPiece(reader);
      if (first && value) {
        const reason = notText(value);
        if (reason !== null) throw new UnreadableFileError(reason);
        first = false;
      }
      let text: string;
      try {
        text = done ? decoder.decode() : decoder.decode(value, { stream: true });
      } catch {
        throw new WrongEncodingError();
      }
      const goOn = text === '' || (await onText(text));
      if (done || !goOn) return;
    }
  } finally {
    await reader.cancel().catch(() => undefined);
  }
}

async function readPiece(reader: ReadableStreamDefaultReader<Uint8Array<ArrayBuffer>>) {
  try {
    return await reader.read();
  } catch {
    throw new UnreadableFileError(
      'The file cannot be read to its end. If it is gzipped, it is damaged or cut short; otherwise it was moved or changed meanwhile.',
    );
  }
}
