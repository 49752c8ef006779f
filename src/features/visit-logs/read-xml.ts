import { Parser } from 'saxen';
import { UnreadableFileError } from './unreadable-file.ts';

/** What is heard while a document is read; names come without their prefix, texts decoded. */
export interface XmlListener {
  open?(name: string, attributes: () => Record<string, string>): void;
  text?(text: string): void;
  close?(name: string): void;
}

const damaged =
  'The workbook is damaged: what it holds is not what a workbook holds. Save it again, or save the sheet as CSV (UTF-8).';

/**
 * Reads an XML document as it comes, in memory that does not grow with it.
 * @param onPiece after each piece; reading waits for it, and stops when it resolves to false
 */
export async function readXml(
  bytes: ReadableStream<Uint8Array<ArrayBuffer>>,
  listener: XmlListener,
  onPiece: () => boolean | Promise<boolean> = () => true,
): Promise<void> {
  const parser = new Parser();
  let failed = false;
  const plain = (name: string) => name.slice(name.indexOf(':') + 1);
  parser.on('error', () => {
    failed = true;
  });
  parser.on('openTag', (name, attributes) => listener.open?.(plain(name), attributes));
  parser.on('closeTag', (name) => listener.close?.(plain(name)));
  parser.on('text', (text, decode) => listener.text?.(decode(text)));
  parser.on('cdata', (text) => listener.text?.(text));
  const decoder = new TextDecoder('utf-8', { fatal: true });
  const reader = bytes.getReader();
  try {
    for (;;) {
      const { done, value } = await reader.read().catch(() => {
        throw new UnreadableFileError(
          'The workbook cannot be read to its end: it is damaged or cut short, or it was moved or changed meanwhile.',
        );
      });
      let text: string;
      try {
        text = done ? decoder.decode() : decoder.decode(value, { stream: true });
      } catch {
        throw new UnreadableFileError(damaged);
      }
      if (text !== '') parser.write(text);
      if (done) parser.end();
      if (failed) throw new UnreadableFileError(damaged);
      if (!(await onPiece()) || done) return;
    }
  } finally {
    await reader.cancel().catch(() => undefined);
  }
}
