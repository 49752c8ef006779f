import { escapeHtml } from '../../mail/layout.ts';
import { mailColours as colours } from '../../mail/mail-picture.ts';
import { face, gridHtml } from './brief-grid.ts';
import { unsubscribeMark, type SectionFacts } from './brief-section.ts';
import { cautions } from './brief-words.ts';
import { sentLine, smallNote, weekLink, type BriefFrame, type SectionWords } from './brief-frame.ts';

/*
 * HTML that needs nothing of the mail program: tables and inline styles. The one style sheet only turns its colours for a dark
 * screen; where it is dropped, every text still carries its colour and its ground.
 */
const darkSheet = `@media (prefers-color-scheme: dark) {
.ground { background: #0E191F !important; }
.paper { background: #18272F !important; }
.ink { color: #F2EADB !important; }
.ink2 { color: #C9C3B6 !important; }
.add { color: #FFDDA6 !important; }
.rule { border-color: #283942 !important; }
.link { color: #8FCDE4 !important; }
.press { background: #8FCDE4 !important; color: #0B1A21 !important; }
}`;

const heading = (text: string) =>
  `<h2 class="ink" style="${face};font-size:20px;line-height:1.2;color:${colours.ink};margin:26px 0 4px;font-weight:bold">${escapeHtml(text)}</h2>`;
const paragraph = (text: string, size = 16) =>
  `<p class="ink2" style="${face};font-size:${String(size)}px;line-height:1.4;color:${colours.ink2};margin:0 0 8px">${escapeHtml(text)}</p>`;
const quiet = (text: string) => paragraph(text, 14);

/** The whole message round its sections. */
export function pageHtml(frame: BriefFrame, title: string, timeZone: string, sections: readonly Section[]): string {
  const foot = [...cautions, smallNote(sections.map(({ section }) => section)), sentLine(frame, timeZone)];
  const html = `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="color-scheme" content="light dark">
<meta name="supported-color-schemes" content="light dark">
<title>${escapeHtml(title)}</title>
<style>
${darkSheet}
</style>
</head>
<body class="ground" bgcolor="${colours.water}" style="margin:0;padding:0;background:${colours.water}">
<table role="presentation" class="ground" width="100%" cellpadding="0" cellspacing="0" bgcolor="${colours.water}" style="background:${colours.water}"><tr><td align="center">
<table role="presentation" class="paper" width="100%" cellpadding="0" cellspacing="0" bgcolor="${colours.paper}" style="max-width:600px;background:${colours.paper};text-align:left"><tr><td style="padding:18px 16px 24px">
<p class="ink2" style="${face};font-size:15px;line-height:1.3;color:${colours.ink2};margin:0"><b class="ink" style="font-size:18px;color:${colours.ink}">Shoalmark</b><br>Weekly brief, ${escapeHtml(frame.name)}</p>
<h1 class="ink" style="${face};font-size:28px;line-height:1.12;font-weight:bold;color:${colours.ink};margin:18px 0 10px">${escapeHtml(title)}</h1>
${sections.map(({ html }) => html).join('\n')}
<div class="rule" style="border-top:1px solid ${colours.hair};margin-top:26px;padding-top:12px">${foot.map(quiet).join('')}
<p class="ink2" style="${face};font-size:14px;line-height:1.4;color:${colours.ink2};margin:0">You get this because the site sends it to you each week. <a class="link" href="${unsubscribeMark}" style="color:${colours.act}">Unsubscribe</a></p></div>
</td></tr></table>
</td></tr></table>
</body>
</html>
`;
  // A figure and its per cent sign stay on one line.
  return html.replace(/(\d) %/g, '$1&#160;%');
}

interface Section {
  section: SectionFacts;
  html: string;
}

/** One site's section. */
export function sectionHtml(frame: BriefFrame, section: SectionFacts, words: SectionWords): Section {
  const { area, chart } = words;
  const parts = [
    frame.covers === 'group'
      ? `<h2 class="ink" style="${face};font-size:24px;line-height:1.15;color:${colours.ink};margin:30px 0 6px;font-weight:bold">${escapeHtml(section.site.name)}</h2>${paragraph(words.headline, 18)}`
      : '',
    paragraph(words.arrivals, 17),
    words.risks.length > 0 ? risksHtml(words) : '',
    area
      ? `${heading(`${area.name}, chance of being short`)}${quiet('Some time in the shift, with the beds planned')}${gridHtml(section, area.id)}`
      : '',
    chart
      ? `${heading('Arrivals by day')}${quiet('Bands: 50, 80 and 95 %; line and figure: the middle. Ring: the same weekday in the last four weeks. Diamond: an unusual day.')}<img class="ink2" src="cid:${chart.cid}" width="${String(chart.picture.width)}" alt="${escapeHtml(chart.alt)}" style="display:block;width:100%;max-width:460px;height:auto;border:0;color:${colours.ink2};${face};font-size:14px;line-height:1.4">`
      : '',
    `${heading('Last week in hindsight')}${hindsightHtml(words)}${paragraph(words.done)}`,
    `${heading('How last week’s forecast did')}${paragraph(words.scores)}`,
    words.changes.length > 0
      ? `${heading('What changed last week')}${words.changes.map((text) => paragraph(text)).join('')}`
      : '',
    words.cautions.length > 0
      ? `${heading('To know')}${words.cautions
          .map(
            (text) =>
              `<p class="ink rule" style="${face};font-size:16px;line-height:1.4;color:${colours.ink};font-weight:bold;margin:0 0 8px;border-left:4px solid ${colours.edge};padding-left:10px">${escapeHtml(text)}</p>`,
          )
          .join('')}`
      : '',
    `<p style="margin:22px 0 0"><a class="press" href="${escapeHtml(weekLink(frame, section))}" style="${face};display:block;background:${colours.act};color:#FFFFFF;text-align:center;font-size:17px;font-weight:bold;padding:13px;text-decoration:none;border-radius:6px">Open the week ahead${frame.covers === 'group' ? ` of ${escapeHtml(section.site.name)}` : ''}</a></p>`,
  ];
  return { section, html: parts.filter((part) => part !== '').join('\n') };
}

function risksHtml({ risks, moreRisks }: SectionWords): string {
  const rows = risks.map(
    ({ name, need, cover, add }) =>
      `<tr><td class="ink rule" style="${face};font-size:16px;color:${colours.ink};padding:10px 8px 10px 0;border-bottom:1px solid ${colours.hair};line-height:1.35"><b>${escapeHtml(name)}</b><br><span class="ink2" style="color:${colours.ink2}">${escapeHtml(need)}.<br>${escapeHtml(cover)}.</span></td><td class="add rule" align="right" valign="middle" style="${face};font-size:26px;font-weight:bold;color:${colours.s2};white-space:nowrap;border-bottom:1px solid ${colours.hair}">${add}</td></tr>`,
  );
  return `${heading('Beds to add, most first')}<table role="presentation" width="100%" cellpadding="0" cellspacing="0">${rows.join('')}</table>${moreRisks === null ? '' : paragraph(moreRisks)}`;
}

function hindsightHtml({ hindsight }: SectionWords): string {
  const head = ['', 'Last week', '4 weeks', 'Year'].map(
    (text, index) =>
      `<th scope="col" align="${index === 0 ? 'left' : 'right'}" class="ink2 rule" style="${face};font-size:14px;font-weight:bold;color:${colours.ink2};padding:4px 0 4px 8px;border-bottom:2px solid ${colours.edge}">${text}</th>`,
  );
  const rows = hindsight.map(({ name, last, four, year }) => {
    const cell = (text: string, bold: boolean) =>
      `<td align="right" class="${bold ? 'ink' : 'ink2'} rule" style="${face};font-size:${bold ? '17' : '15'}px;${bold ? 'font-weight:bold;' : ''}color:${bold ? colours.ink : colours.ink2};padding:7px 0 7px 8px;border-bottom:1px solid ${colours.hair}">${escapeHtml(text)}</td>`;
    return `<tr><th scope="row" align="left" class="ink rule" style="${face};font-size:15px;font-weight:normal;line-height:1.3;color:${colours.ink};padding:7px 0;border-bottom:1px solid ${colours.hair}">${escapeHtml(name)}</th>${cell(last, true)}${cell(four, false)}${cell(year, false)}</tr>`;
  });
  return `<table width="100%" cellpadding="0" cellspacing="0" style="border-collapse:collapse;margin:0 0 10px"><tr>${head.join('')}</tr>${rows.join('')}</table>`;
}
