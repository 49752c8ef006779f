import Papa from 'papaparse';
import type { ParseRecords } from '../../../shared/domain/visit-file.ts';

export const delimiters = [',', ';', '\t', '|'] as const;

/** How the records of a file are set off from each other. */
export interface RecordForm {
  delimiter: string;
  newline: '\n' | '\r';
}

/** Finds the delimiter and the end of lines from the first piece of text. */
export function findRecordForm(text: string): RecordForm {
  const start = text.slice(0, 100_000);
  const newline = start.includes('\n') || !start.includes('\r') ? '\n' : '\r';
  const { meta } = Papa.parse<string[]>(start, { preview: 20, delimitersToGuess: [...delimiters], newline });
  return { delimiter: meta.delimiter, newline };
}

/** Records as RFC 4180 has them, with any delimiter. */
export function makeRecordParser(form: RecordForm): ParseRecords {
  return (text, isLast) => {
    const parser = new Papa.Parser({ ...form, quoteChar: '"' });
    const result = parser.parse(text, 0, !isLast) as Papa.ParseResult<string[]>;
    return {
      records: result.data,
      consumed: result.meta.cursor,
      openQuote: result.errors.some((error) => error.code === 'MissingQuotes'),
    };
  };
}
