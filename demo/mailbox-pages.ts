import { escapeHtml, renderPage } from './page-shell.ts';
import type { ReadMail } from './read-mail.ts';

export interface KeptMail extends ReadMail {
  id: number;
  receivedAt: string;
  /** The envelope's recipients. */
  recipients: string[];
}

const band = 'Stand-in mailbox (demo): every e-mail that the demo sent, and none left this computer';

/** The list, newest first. */
export function mailListPage(mails: readonly KeptMail[]): string {
  const rows = mails
    .map(
      (mail) =>
        `<tr><td>${escapeHtml(mail.receivedAt.replace('T', ' ').slice(0, 16))} UTC</td><td>${escapeHtml(mail.recipients.join(', '))}</td><td><a href="/messages/${String(mail.id)}">${escapeHtml(mail.subject || 'No subject')}</a></td></tr>`,
    )
    .join('');
  return renderPage({
    title: 'Mailbox of the demo',
    band,
    wide: true,
    body:
      mails.length === 0
        ? '<h1>Mailbox</h1><p>Nothing has been sent yet.</p>'
        : `<h1>Mailbox</h1><p>${String(mails.length)} sent, newest first. The same as data: <a href="/messages.json">messages.json</a>.</p>
<table><thead><tr><th scope="col">Sent</th><th scope="col">To</th><th scope="col">Subject</th></tr></thead><tbody>${rows}</tbody></table>`,
  });
}

/** One message: HTML part in a frame that runs no script, text part, headers. */
export function mailPage(mail: KeptMail): string {
  const headers = mail.headers
    .map(({ name, value }) => `<tr><th scope="row">${escapeHtml(name)}</th><td>${escapeHtml(value)}</td></tr>`)
    .join('');
  const html =
    mail.html === null
      ? '<p>None.</p>'
      : `<iframe sandbox="allow-popups allow-popups-to-escape-sandbox" src="/messages/${String(mail.id)}/html" title="HTML part of the message"></iframe>`;
  const text = mail.text === null ? '<p>None.</p>' : `<pre>${escapeHtml(mail.text)}</pre>`;
  const attached = mail.attachments
    .map(({ fileName, contentType, content }) => `${fileName ?? contentType} (${String(content.length)} bytes)`)
    .join(', ');
  return renderPage({
    title: mail.subject || 'No subject',
    band,
    wide: true,
    body: `<p><a href="/">All messages</a></p><h1>${escapeHtml(mail.subject || 'No subject')}</h1>
<p>From ${escapeHtml(mail.from)} to ${escapeHtml(mail.recipients.join(', '))}</p>
<h2>HTML</h2>${html}<h2>Text</h2>${text}${attached === '' ? '' : `<h2>Attached</h2><p>${escapeHtml(attached)}</p>`}
<h2>Headers</h2><table><tbody>${headers}</tbody></table>`,
  });
}

/** The HTML part as the frame shows it: pictures by Content-ID put in place, links opening outside the frame. */
export function mailHtml(mail: KeptMail): string {
  let html = mail.html ?? '';
  for (const { contentId, contentType, content } of mail.attachments) {
    if (contentId !== null)
      html = html.replaceAll(`cid:${contentId}`, `data:${contentType};base64,${content.toString('base64')}`);
  }
  const base = '<base target="_blank">';
  return /<head[^>]*>/i.test(html) ? html.replace(/<head[^>]*>/i, (head) => head + base) : base + html;
}

export function noMailPage(): string {
  return renderPage({
    title: 'No such message',
    band,
    body: '<h1>No such message</h1><p><a href="/">All messages</a></p>',
  });
}
