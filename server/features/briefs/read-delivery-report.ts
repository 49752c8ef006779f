import { simpleParser } from 'mailparser';

/** What a report says of one message of ours. */
export interface DeliveryReport {
  /** The part before the @ of the Message-ID that it reports on. */
  messageId: string;
  action: 'failed' | 'delayed';
  /** The status code (RFC 3463, 2): of class 5 it fails for good, of class 4 for now. */
  status: string;
  /** What the mail server that could not deliver it said, without addresses; empty if nothing. */
  said: string;
}

const originals = ['message/rfc822', 'text/rfc822-headers', 'message/global', 'message/global-headers'];

/**
 * Reads a message that came to the address that mail is sent from, as a report on a brief's delivery (RFC 3464): the
 * fields of its recipient, and the Message-ID of the message that it returns. Null for anything else, an absence note
 * or a report of success for instance.
 */
export async function readDeliveryReport(raw: Buffer): Promise<DeliveryReport | null> {
  const mail = await simpleParser(raw, { skipHtmlToText: true, skipTextToHtml: true, skipImageLinks: true });
  const type = mail.headers.get('content-type') as { value?: string; params?: Record<string, string> } | undefined;
  if (type?.value !== 'multipart/report' || type.params?.['report-type']?.toLowerCase() !== 'delivery-status')
    return null;

  // The parser gives the fields of the report as text, after what is written for people.
  const fields = (mail.text ?? '')
    .split(/\r?\n[ \t]*\r?\n/)
    .map(readFields)
    .find((each) => each.has('final-recipient') && each.has('action'));
  const action = fields?.get('action')?.toLowerCase();
  const status = /^[245]\.\d{1,3}\.\d{1,3}/.exec(fields?.get('status') ?? '')?.[0];
  if ((action !== 'failed' && action !== 'delayed') || status === undefined || status.startsWith('2')) return null;

  const returned = mail.attachments.find(({ contentType }) => originals.includes(contentType));
  const named = returned ? (await simpleParser(returned.content, { skipTextToHtml: true })).messageId : undefined;
  const messageId = /^<?(brief-[\w-]+)@/.exec(named ?? mail.inReplyTo ?? '')?.[1];
  if (messageId === undefined) return null;
  return { messageId, action, status, said: withoutAddresses(fields?.get('diagnostic-code') ?? '') };
}

/** Fields of one group, folded lines put together (RFC 5322, 2.2.3), by name in small letters. */
function readFields(group: string): Map<string, string> {
  const lines = group.replaceAll(/\r?\n[ \t]+/g, ' ').split(/\r?\n/);
  return new Map(
    lines.flatMap((line) => {
      const [, name, value] = /^([A-Za-z][A-Za-z-]*):[ \t]*(.*)$/.exec(line) ?? [];
      return name === undefined ? [] : [[name.toLowerCase(), value.trim()] as const];
    }),
  );
}

function withoutAddresses(text: string): string {
  return text
    .replace(/^smtp;\s*/i, '')
    .replace(/<?[^\s<>]+@[^\s<>]+>?/g, '…')
    .replaceAll(/[\p{Cc}\s]+/gu, ' ')
    .trim()
    .slice(0, 300);
}
