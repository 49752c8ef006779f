/** What a message says, once, for its plain text and its HTML. */
export interface MailContent {
  /** The answer as a sentence. */
  title: string;
  blocks: { heading: string | null; lines: string[] }[];
  link: { text: string; url: string };
  /** Cautions and what else must be known. */
  footer: string[];
}

/** Text as HTML. */
export function escapeHtml(text: string): string {
  return text.replace(/[&<>"']/g, (character) => `&#${String(character.charCodeAt(0))};`);
}

/** Plain text, and HTML that reads the same without style sheets, without images and at any width. */
export function layOutMail({ title, blocks, link, footer }: MailContent): { text: string; html: string } {
  const text = [
    title,
    ...blocks.map(({ heading, lines }) => [...(heading === null ? [] : [heading]), ...lines].join('\n')),
    `${link.text}:\n${link.url}`,
    footer.join('\n'),
  ].join('\n\n');
  const paragraph = (line: string) => `<p style="margin:0 0 8px">${escapeHtml(line)}</p>`;
  const html = `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="color-scheme" content="light dark">
<title>${escapeHtml(title)}</title>
</head>
<body style="margin:0;padding:20px;font:16px/1.45 'Nunito Sans',system-ui,sans-serif">
<div style="max-width:600px">
<h1 style="margin:0 0 16px;font-size:22px;line-height:1.2">${escapeHtml(title)}</h1>
${blocks
  .map(
    ({ heading, lines }) =>
      `<div style="margin:0 0 16px">${heading === null ? '' : `<h2 style="margin:0 0 4px;font-size:18px">${escapeHtml(heading)}</h2>`}${lines.map(paragraph).join('')}</div>`,
  )
  .join('\n')}
<p style="margin:0 0 20px"><a href="${escapeHtml(link.url)}" style="font-weight:bold">${escapeHtml(link.text)}</a></p>
<div style="border-top:1px solid #71848d;padding-top:12px;font-size:14px">${footer.map(paragraph).join('')}</div>
</div>
</body>
</html>
`;
  return { text: `${text}\n`, html };
}
