import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { createHash } from 'node:crypto';

/** Path under which each stand-in serves the product's typeface. */
export const fontPath = '/nunito-sans.woff2';

let fontBytes: Buffer | undefined;

/** Nunito Sans, variable, Latin; read once from the installed package. */
export function nunitoSans(): Buffer {
  const resolve = createRequire(import.meta.url).resolve;
  fontBytes ??= readFileSync(resolve('@fontsource-variable/nunito-sans/files/nunito-sans-latin-full-normal.woff2'));
  return fontBytes;
}

/** Text made safe inside HTML elements and quoted attributes. */
export function escapeHtml(text: string): string {
  return text
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;')
    .replaceAll("'", '&#39;');
}

const light =
  '--water:#E6EDEF;--paper:#F7FAFA;--ink:#11232C;--ink2:#374C56;--ink3:#51656F;--hair:#C4D0D4;--edge:#71848D;' +
  '--act:#0D5875;--act-ink:#FFFFFF;--act-soft:#CFE3EA;--g1:#B59C63;--r4:#AF4824;--warn:#7A3E00;--sky:#16303D;--sky-ink:#F2EAD9';
const dark =
  '--water:#0E191F;--paper:#18272F;--ink:#F2EADB;--ink2:#C9C3B6;--ink3:#A09F97;--hair:#283942;--edge:#6F828B;' +
  '--act:#8FCDE4;--act-ink:#0B1A21;--act-soft:#173743;--g1:#85724A;--r4:#DE8B3E;--warn:#F0BE7E;--sky:#060E12;--sky-ink:#F2EAD9';

const styles = `
@font-face{font-family:"Nunito Sans";src:url(${fontPath}) format("woff2");font-weight:200 1000;font-stretch:75% 125%;font-display:swap}
:root{color-scheme:light;${light}}
@media (prefers-color-scheme:dark){:root{color-scheme:dark;${dark}}}
*{box-sizing:border-box}
body{margin:0;background:var(--water);color:var(--ink);font:550 17px/1.42 "Nunito Sans",system-ui,sans-serif;font-variant-numeric:tabular-nums}
.band{background:var(--sky);color:var(--sky-ink);padding:10px 24px;font-weight:700;font-size:15px}
main{max-width:420px;margin:0 auto;padding:32px 24px 56px}
main.wide{max-width:1040px}
p.brand{color:var(--ink);display:flex;align-items:center;gap:10px;font-weight:850;font-size:21px;letter-spacing:-.01em;margin:0 0 28px}
.brand svg{width:34px;height:34px}
h1{font-size:36px;line-height:1.06;letter-spacing:-.022em;font-weight:780;margin:0 0 10px}
h2{font-size:19px;font-weight:800;margin:36px 0 8px}
p{margin:0 0 16px;color:var(--ink2)}
label{display:block;font-weight:800;font-size:15px;margin:18px 0 5px}
input{width:100%;height:48px;padding:0 12px;font:inherit;font-size:17px;color:var(--ink);background:var(--paper);border:0;border-bottom:2px solid var(--edge);border-radius:5px 5px 0 0}
button,.button{display:inline-block;width:100%;min-height:50px;margin-top:22px;padding:12px 20px;border:0;border-radius:6px;background:var(--act);color:var(--act-ink);font:inherit;font-weight:800;text-align:center;text-decoration:none;cursor:pointer}
a{color:var(--act)}
:focus-visible{outline:3px solid var(--act);outline-offset:1px}
.problem{color:var(--warn);font-weight:800;margin:18px 0 0}
table{width:100%;border-collapse:collapse;font-size:15px}
th,td{text-align:left;vertical-align:top;padding:7px 10px 7px 0;border-bottom:1px solid var(--hair)}
th{font-weight:800;color:var(--ink2)}
code{font:inherit;font-weight:800;color:var(--ink)}
.quiet{color:var(--ink3);font-size:14px}
pre{white-space:pre-wrap;overflow-wrap:anywhere;background:var(--paper);padding:14px;margin:0;font:14px/1.5 ui-monospace,monospace}
iframe{width:100%;height:640px;border:1px solid var(--hair);background:#fff}
`;

const mark =
  '<svg viewBox="0 0 40 40" aria-hidden="true"><path d="M2 33H8V29H14V24H20V20H32V27H38V37H2z" fill="var(--g1)"/>' +
  '<path d="M20 20V6H26V12H32V20z" fill="var(--r4)"/><path d="M0 17H18.4V20H0zM33.6 17H40V20H33.6z" fill="var(--ink)"/></svg>';

const styleHash = createHash('sha256').update(styles).digest('base64');

export interface Page {
  title: string;
  /** The strip at the head that says what this stand-in is. */
  band: string;
  /** HTML of the page's main part; every value in it already escaped. */
  body: string;
  wide?: boolean;
  /** A script to run at the end, allowed by its hash. */
  script?: string;
}

/** A whole page of a stand-in: the product's typeface and colours, light or dark as the system has it. */
export function renderPage({ title, band, body, wide, script }: Page): string {
  return `<!doctype html>
<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width,initial-scale=1">
<title>${escapeHtml(title)}</title><link rel="icon" href="data:,"><style>${styles}</style></head>
<body><div class="band" role="note">${escapeHtml(band)}</div><main${wide === true ? ' class="wide"' : ''}>
<p class="brand">${mark}<span>Shoalmark</span></p>
${body}</main>${script === undefined ? '' : `<script>${script}</script>`}</body></html>`;
}

/** The content security policy of such a page; `formTargets` are further origins that a form's answer may redirect to. */
export function pagePolicy(options: { formTargets?: string[]; script?: string } = {}): string {
  const scriptSource =
    options.script === undefined
      ? "'none'"
      : `'sha256-${createHash('sha256').update(options.script).digest('base64')}'`;
  return [
    "default-src 'none'",
    `style-src 'sha256-${styleHash}'`,
    `script-src ${scriptSource}`,
    "font-src 'self'",
    'img-src data:',
    "frame-src 'self'",
    `form-action ${["'self'", ...(options.formTargets ?? [])].join(' ')}`,
    "frame-ancestors 'none'",
    "base-uri 'none'",
  ].join('; ');
}
