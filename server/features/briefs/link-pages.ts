import { escapeHtml } from '../../mail/layout.ts';

const styles = `
:root { color-scheme: light dark; --ground: #E6EDEF; --ink: #11232C; --ink2: #374C56; --act: #0D5875; --act-ink: #FFFFFF; }
@media (prefers-color-scheme: dark) {
  :root { --ground: #0E191F; --ink: #F2EADB; --ink2: #C9C3B6; --act: #8FCDE4; --act-ink: #0B1A21; }
}
body { margin: 0; padding: 32px 20px; background: var(--ground); color: var(--ink); font: 17px/1.45 'Nunito Sans', system-ui, sans-serif; }
main { max-width: 36rem; margin: 0 auto; }
h1 { font-size: 30px; line-height: 1.1; margin: 20px 0 12px; }
p { margin: 0 0 14px; color: var(--ink2); overflow-wrap: anywhere; }
button { min-height: 48px; padding: 0 20px; border: 0; border-radius: 6px; background: var(--act); color: var(--act-ink); font: inherit; font-weight: 800; cursor: pointer; }
:focus-visible { outline: 3px solid var(--act); outline-offset: 2px; }
`;

/** A page for whoever follows a link of a mail: it needs no sign-in, no script and nothing else of the product. */
export function linkPage({
  title,
  lines,
  button,
  nonce,
}: {
  title: string;
  lines: readonly string[];
  /** Sends the page's own address back as a POST; null: there is nothing to press. */
  button: string | null;
  nonce: string;
}): string {
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="robots" content="noindex">
<title>${escapeHtml(title)} · Shoalmark</title>
<style nonce="${escapeHtml(nonce)}">${styles}</style>
</head>
<body>
<main>
<b>Shoalmark</b>
<h1>${escapeHtml(title)}</h1>
${lines.map((line) => `<p>${escapeHtml(line)}</p>`).join('\n')}
${button === null ? '' : `<form method="post"><button type="submit">${escapeHtml(button)}</button></form>`}
</main>
</body>
</html>
`;
}
