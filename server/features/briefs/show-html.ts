import type { Response } from 'express';
import type { Brief } from '../../entities/Brief.ts';
import { unsubscribeMark } from './brief-section.ts';

/** Inline styles and the pictures that travelled with it; no script, no form, nothing from elsewhere. */
const policy =
  "default-src 'none'; style-src 'unsafe-inline'; img-src data:; base-uri 'none'; form-action 'none'; frame-ancestors 'self'; sandbox allow-popups allow-popups-to-escape-sandbox";

/** Answers with the HTML part as it was sent, for a frame: pictures put in place of their Content-IDs, each recipient's own link made dead. */
export function showHtml(res: Response, { html, attachments }: Brief): void {
  let shown = html.replaceAll(unsubscribeMark, '#').replace('<head>', '<head><base target="_blank">');
  for (const { cid, contentType, content } of JSON.parse(attachments) as {
    cid: string;
    contentType: string;
    content: string;
  }[]) {
    shown = shown.replaceAll(`"cid:${cid}"`, `"data:${contentType};base64,${content}"`);
  }
  // The frame is in a world of its own; it must not ask how the page round it is kept.
  res.removeHeader('origin-agent-cluster');
  res
    .setHeader('content-security-policy', policy)
    .setHeader('x-frame-options', 'SAMEORIGIN')
    .setHeader('cache-control', 'no-store')
    .type('html')
    .send(shown);
}
