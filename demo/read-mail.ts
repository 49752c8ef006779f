/** One e-mail as the stand-in mailbox keeps it. */
export interface ReadMail {
  /** Header lines in the order received, names as written, values unfolded and decoded. */
  headers: { name: string; value: string }[];
  subject: string;
  from: string;
  to: string;
  text: string | null;
  html: string | null;
  /** Every other part. `contentId` is what HTML names it by, without angle brackets. */
  attachments: { contentType: string; fileName: string | null; contentId: string | null; content: Buffer }[];
}

/**
 * Reads a message as this product sends it: MIME (RFC 2045, 2046) with multipart nesting, 7bit, 8bit, base64 and
 * quoted-printable, encoded words (RFC 2047), UTF-8 and Latin-1. It is no general mail reader.
 */
export function readMail(raw: Buffer): ReadMail {
  const root = readEntity(raw.toString('latin1'));
  const mail: ReadMail = {
    headers: root.headers,
    subject: root.get('subject'),
    from: root.get('from'),
    to: root.get('to'),
    text: null,
    html: null,
    attachments: [],
  };
  collect(root, mail);
  return mail;
}

interface Entity {
  headers: { name: string; value: string }[];
  get(name: string): string;
  /** One character a byte. */
  body: string;
}

function readEntity(source: string): Entity {
  // A part without headers begins with the empty line itself.
  const split = /(?:^|\r?\n)\r?\n/.exec(source);
  const head = split ? source.slice(0, split.index) : source;
  const body = split ? source.slice(split.index + split[0].length) : '';
  const headers = head
    .replace(/\r?\n[ \t]+/g, ' ')
    .split(/\r?\n/)
    .filter((line) => line.includes(':'))
    .map((line) => {
      const colon = line.indexOf(':');
      return { name: line.slice(0, colon), value: decodeWords(line.slice(colon + 1).trim()) };
    });
  return {
    headers,
    get: (name) => headers.find((header) => header.name.toLowerCase() === name)?.value ?? '',
    body,
  };
}

function collect(entity: Entity, mail: ReadMail): void {
  const type = entity.get('content-type') || 'text/plain';
  const boundary = parameter(type, 'boundary');
  if (type.startsWith('multipart/') && boundary !== null) {
    const parts = `\n${entity.body}`.split(new RegExp(`\\r?\\n--${escapePattern(boundary)}`)).slice(1);
    for (const part of parts) {
      if (part.startsWith('--')) break;
      collect(readEntity(part.replace(/^[ \t]*\r?\n/, '')), mail);
    }
    return;
  }
  const content = decodeBody(entity.body, entity.get('content-transfer-encoding').toLowerCase());
  const disposition = entity.get('content-disposition');
  const attached = disposition.startsWith('attachment');
  if (!attached && type.startsWith('text/plain') && mail.text === null) mail.text = decodeText(content, type);
  else if (!attached && type.startsWith('text/html') && mail.html === null) mail.html = decodeText(content, type);
  else {
    mail.attachments.push({
      contentType: type.split(';')[0].trim(),
      fileName: parameter(disposition, 'filename') ?? parameter(type, 'name'),
      contentId: entity.get('content-id').replace(/^<|>$/g, '') || null,
      content,
    });
  }
}

function parameter(value: string, name: string): string | null {
  const found = new RegExp(`;\\s*${name}=("[^"]*"|[^;\\s]+)`, 'i').exec(value);
  return found ? found[1].replace(/^"|"$/g, '') : null;
}

function escapePattern(text: string): string {
  return text.replace(/[.*+?^${}()|[\]\\]/g, '\\$&');
}

function decodeBody(body: string, encoding: string): Buffer {
  if (encoding === 'base64') return Buffer.from(body, 'base64');
  if (encoding === 'quoted-printable') return decodeQuoted(body.replace(/=[ \t]*\r?\n/g, ''));
  return Buffer.from(body, 'latin1');
}

function decodeQuoted(text: string): Buffer {
  const bytes = text.replace(/=([0-9A-Fa-f]{2})/g, (_, hex: string) => String.fromCharCode(parseInt(hex, 16)));
  return Buffer.from(bytes, 'latin1');
}

function decodeText(content: Buffer, type: string): string {
  return toText(content, parameter(type, 'charset') ?? 'utf-8');
}

function toText(content: Buffer, charset: string): string {
  return content.toString(/^(iso-8859-1|latin1|us-ascii)$/i.test(charset) ? 'latin1' : 'utf8');
}

function decodeWords(value: string): string {
  return Buffer.from(value, 'latin1')
    .toString('utf8')
    .replace(/(\?=)\s+(=\?)/g, '$1$2')
    .replace(/=\?([^?]+)\?([BQ])\?([^?]*)\?=/gi, (_, charset: string, kind: string, text: string) =>
      toText(
        kind.toUpperCase() === 'B' ? Buffer.from(text, 'base64') : decodeQuoted(text.replaceAll('_', ' ')),
        charset,
      ),
    );
}
