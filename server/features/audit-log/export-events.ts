import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { setImmediate as nextTurn } from 'node:timers/promises';
import type { Response } from 'express';
import Papa from 'papaparse';
import { auditEventInWords } from '../../../shared/domain/audit-topic.ts';
import type { ChainCheck } from '../../database/audit-chain.ts';
import type { Dependencies } from '../../dependencies.ts';
import { presentEvent } from './present.ts';
import { readEvents, type AuditFilter } from './read-events.ts';

const batch = 500;
const most = 100_000;

const columns = [
  'number',
  'time (UTC)',
  'person',
  'who',
  'site',
  'name of the site',
  'event',
  'in words',
  'record',
  'detail',
  'note',
  'address',
  'request id',
  'digest of the note',
  'digest before',
  'digest',
] as const;

/** Sends what fits as CSV (RFC 4180), newest first; the head says how the chain was found. */
export async function exportEvents(
  { database }: Pick<Dependencies, 'database'>,
  res: Response,
  filter: AuditFilter,
  { of, now, chain, siteNames, withText }: ExportFacts,
): Promise<void> {
  res.status(200);
  res.type('text/csv; charset=utf-8');
  res.setHeader('cache-control', 'no-store');
  res.setHeader('content-disposition', 'attachment; filename="audit-trail.csv"');
  const line = (values: readonly unknown[]) =>
    // What a spreadsheet would compute is made text.
    `${Papa.unparse([values as unknown[]], { escapeFormulae: true, newline: '\r\n' })}\r\n`;
  async function* lines(): AsyncGenerator<string> {
    yield `# Audit trail of ${of.replaceAll(/\s+/g, ' ')}, written ${isoTime(now)}\r\n`;
    yield `# Chain ${chain.whole ? 'whole' : `BROKEN at row ${String(chain.fault?.eventId)} (${chain.fault?.kind ?? ''})`}: ${String(chain.rows)} rows checked, newest digest ${chain.head}\r\n`;
    yield '# A digest is SHA-256 over the JSON array [1, number, time as UTC seconds, person, who, site, event, record, detail, address, request id, digest of the note, digest before]; what is empty here is null there.\r\n';
    yield `${columns.join(',')}\r\n`;
    let before: number | undefined;
    for (let sent = 0; sent < most;) {
      const rows = await readEvents(database.read, filter, before, Math.min(batch, most - sent));
      yield rows
        .map((row) => {
          const shown = presentEvent(row, siteNames, withText);
          const note = shown.note.state === 'kept' ? (shown.note.text ?? 'kept at the site') : shown.note.state;
          const { event } = row;
          return line([
            event.id,
            isoTime(event.at),
            event.personId ?? '',
            event.actor,
            event.siteId ?? '',
            shown.siteName ?? '',
            event.event,
            auditEventInWords(event.event),
            event.subject,
            event.detail,
            note === 'none' ? '' : note,
            event.address ?? '',
            event.requestId ?? '',
            event.noteHash ?? '',
            event.previousHash,
            event.hash,
          ]);
        })
        .join('');
      if (rows.length < batch) return;
      sent += rows.length;
      before = rows[rows.length - 1].event.id;
      await nextTurn();
    }
  }
  await pipeline(Readable.from(lines()), res);
}

interface ExportFacts {
  /** Whose trail, in words. */
  of: string;
  now: number;
  chain: ChainCheck;
  siteNames: ReadonlyMap<string, string>;
  withText: boolean;
}

function isoTime(at: number): string {
  return new Date(at * 1000).toISOString().replace('.000', '');
}
