import Papa from 'papaparse';
import type { ParseRecords } from '../../../shared/domain/visit-file.ts';

/** Comma-separated records (RFC 4180) with lines ended by LF or CRLF: the form that uploads have. */
export function makeRecordParser(): ParseRecords {
  return (text, isLast) => {
    const parser = new Papa.Parser({ delimiter: ',', newline: '\n', quoteChar: '"' });
    const result = parser.parse(text, 0, !isLast) as Papa.ParseResult<string[]>;
    return {
      records: result.data,
      consumed: result.meta.cursor,
      openQuote: result.errors.some((error) => error.code === 'MissingQuotes'),
    };
  };
}
