import { isGzip, isZip } from '../../../shared/domain/sniff-file.ts';
import { decodeFile, type Encoding } from './decode-file.ts';
import { EncounterReader, type EncounterFacts } from './read-encounters.ts';
import { readWorkbook, type SheetFacts } from './read-workbook.ts';

/** What a file is: separated text, an .xlsx workbook, or FHIR Encounters one a line. */
export type SourceKind = 'text' | 'workbook' | 'encounters';

/** What reading told about the file besides its rows. */
export interface SourceFacts {
  sheet: SheetFacts | null;
  encounters: EncounterFacts | null;
}

/** Judges by the first bytes, unpacked if the file is gzipped. */
export async function kindOf(file: Blob): Promise<SourceKind> {
  let start = new Uint8Array(await file.slice(0, 1024).arrayBuffer());
  if (isZip(start)) return 'workbook';
  if (isGzip(start)) {
    const reader = file.stream().pipeThrough(new DecompressionStream('gzip')).getReader();
    // A damaged file is told of when it is read.
    const piece = await reader.read().catch(() => null);
    await reader.cancel().catch(() => undefined);
    start = piece?.value ?? new Uint8Array();
  }
  const text = new TextDecoder().decode(start.subarray(0, 1024)).trimStart();
  return text.startsWith('{') || text.startsWith('[') ? 'encounters' : 'text';
}

/**
 * Reads a file of any kind as separated text, piece by piece; a workbook and Encounters come out with commas and a header.
 * @param encoding of a text file
 * @param onText gets each piece; reading goes on once it resolves, and stops when it resolves to false
 * @param onBytes told how many bytes of the file were read
 */
export async function readSource(
  file: Blob,
  { kind, encoding }: { kind: SourceKind; encoding: Encoding },
  onText: (text: string) => boolean | Promise<boolean>,
  onBytes: (bytes: number) => void,
): Promise<SourceFacts> {
  if (kind === 'workbook') return { sheet: await readWorkbook(file, onText, onBytes), encounters: null };
  if (kind === 'text') {
    await decodeFile(file, encoding, onText, onBytes);
    return { sheet: null, encounters: null };
  }
  const encounters = new EncounterReader();
  let goOn = true;
  await decodeFile(
    file,
    encoding,
    async (text) => {
      const made = encounters.push(text);
      if (made !== '') goOn = await onText(made);
      return goOn;
    },
    onBytes,
  );
  if (goOn) {
    const made = encounters.end();
    if (made !== '') await onText(made);
  }
  return { sheet: null, encounters: encounters.facts };
}
