import { simpleParser, type AddressObject } from 'mailparser';

/** One e-mail as the stand-in mailbox keeps it. */
export interface ReadMail {
  /** Header lines in the order received, as written but unfolded. */
  headers: { name: string; value: string }[];
  subject: string;
  from: string;
  to: string;
  text: string | null;
  html: string | null;
  /** Every other part. `contentId` is what HTML names it by, without angle brackets. */
  attachments: { contentType: string; fileName: string | null; contentId: string | null; content: Buffer }[];
}

/** Reads a message with mailparser; images stay apart, so that the page shows what a mail program would fetch. */
export async function readMail(raw: Buffer): Promise<ReadMail> {
  const mail = await simpleParser(raw, { skipImageLinks: true, skipHtmlToText: true, skipTextToHtml: true });
  return {
    headers: mail.headerLines.map(({ line }) => {
      const unfolded = line.replace(/\r?\n[ \t]+/g, ' ');
      const colon = unfolded.indexOf(':');
      return { name: unfolded.slice(0, colon), value: unfolded.slice(colon + 1).trim() };
    }),
    subject: mail.subject ?? '',
    from: mail.from?.text ?? '',
    to: addresses(mail.to),
    text: mail.text ?? null,
    html: mail.html === false ? null : (mail.html ?? null),
    attachments: mail.attachments.map((part) => ({
      contentType: part.contentType,
      fileName: part.filename ?? null,
      contentId: part.cid ?? null,
      content: part.content,
    })),
  };
}

function addresses(to: AddressObject | AddressObject[] | undefined): string {
  if (!to) return '';
  return Array.isArray(to) ? to.map((each) => each.text).join(', ') : to.text;
}
