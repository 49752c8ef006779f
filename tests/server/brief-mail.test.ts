import { inflateSync } from 'node:zlib';
import { describe, expect, test } from 'vitest';
import { readMail } from '../../demo/read-mail.ts';
import { unsubscribeMark, type ComposedBrief } from '../../server/features/briefs/brief-section.ts';
import { writeBrief } from '../../server/features/briefs/write-brief.ts';
import { unpackWoff } from '../../server/mail/mail-fonts.ts';
import { mailColours } from '../../server/mail/mail-picture.ts';
import { openMailLine } from '../../server/mail/mail-line.ts';
import { themes } from '../../tailwind.config.ts';
import { briefNow, buildSection } from '../support/build-section.ts';
import { startMailServer } from '../support/start-mail-server.ts';

const frame = {
  name: 'Farrowmere General',
  covers: 'site' as const,
  composedAt: briefNow,
  baseUrl: 'https://shoalmark.example',
};
const write = (more: Parameters<typeof buildSection>[0] = {}): ComposedBrief => writeBrief(frame, [buildSection(more)]);
const whole = write();

/** Text of the HTML as a reader has it, without tags and style sheet. */
const read = (html: string) =>
  html
    .replace(/^[^]*<body[^>]*>/, '')
    .replace(/<[^>]+>/g, ' ')
    .replace(/&#(\d+);/g, (_, code: string) => String.fromCharCode(Number(code)))
    .replace(/\s+/g, ' ');

describe('what a brief says', () => {
  test('opens with the answer, and names the worst shifts with beds, nurse hours and the last chance to book', () => {
    const said = read(whole.html);
    // Chances of the nights are 40, 45, 50, … 70 %: five of them are at least one in two.
    expect(whole.subject).toBe('Farrowmere General, weekly brief: Five shifts are likely to run short in Acute.');
    expect(said).toContain('Tuesday Night, Acute Needs 30 at a 10 % risk, 20 planned. Some time short: 70 %, likely.');
    expect(said).toContain('10 more beds (14 nurse hours), 2 of which do not exist; book by Sat 5 Dec, 21:00.');
    expect(said).toContain(
      'Arrivals next week: most likely about 700, and with a chance of 8 in 10 between 630 and 770; about as many as in the last four weeks (700 a week).',
    );
    expect(said).toContain(
      '152 of 168 hours fell inside the 90 % range forecast 12 hours ahead; about 151 were to be expected.',
    );
    expect(said).toContain('3 risks were acknowledged; staffed beds were changed on the day once.');
    expect(said).toContain('Version 4 of the staffed-bed plan was saved by Petra Vance.');
  });

  test('a last chance that has passed is said to have passed', () => {
    const section = buildSection();
    const shifts = section.outlook!.shifts.map((each) => ({ ...each, lastChanceAt: briefNow - 60 }));
    expect(write({ outlook: { ...section.outlook!, shifts } }).text).toContain(
      'the last chance to book was Tue 1 Dec, 06:59',
    );
  });

  test('the last week stands against four weeks and a year', () => {
    expect(whole.text).toContain('Arrivals: 710 (four weeks before: 700; year: 700)');
    expect(whole.text).toContain('Hours with an area short: 32 (four weeks before: 32; year: 32)');
    expect(whole.text).toContain('Boarding, patient-hours: 600 (four weeks before: 600; year: 600)');
    expect(whole.text).toContain('Share of need that is boarding: 15 % (four weeks before: 15 %; year: 15 %)');
    expect(whole.text).toContain('Left before treatment: 32 (four weeks before: 30; year: 30)');
    expect(whole.text).toContain('Waited over 240 min for a bed space: 40 (four weeks before: 40; year: 40)');
  });

  test('small counts of people are kept back, whichever part of the message', () => {
    const { last } = buildSection();
    const small = write({
      last: { ...last, dispositions: [505, 152, 21, 3, 0], waits: { known: 690, tooLong: 2 } },
    });
    for (const part of [small.text, read(small.html)]) {
      expect(part).toMatch(/Left before treatment:? not shown/);
      expect(part).toMatch(/for a bed space:? not shown/);
      expect(part).toContain('Counts of fewer than 5 people');
    }
    // A department so small that the total itself would tell.
    const tiny = write({ last: { ...last, arrivals: 3, dispositions: [1, 1, 1, 0, 0] } });
    expect(tiny.text).toContain('Arrivals: not shown');
  });

  test('what is not known is said to be not known, and never looks calm', () => {
    const { last } = buildSection();
    const nothing = { hoursShort: null, hoursAnyShort: null, presentHours: null, boardingHours: null };
    const { text, subject } = write({
      outlook: null,
      arrivals: null,
      arrivalsRefusal: 'With under eight weeks of history arrivals are forecast for 24 hours at most.',
      last: { ...last, ...nothing, arrivals: null, dispositions: null, waits: null },
      year: [],
      scores: null,
    });
    expect(subject).toContain('What next week needs is not known');
    expect(text).toContain('With under eight weeks of history');
    expect(text).toContain('Bed need for next week has not been computed');
    expect(text).toContain('Arrivals: not known (four weeks before: 700; year: not known)');
    expect(text).toContain('does not cover the whole of last week');
    expect(text).toContain('None of last week’s forecasts has been scored yet');
    expect(text).not.toContain('enough for the planning risk');
  });

  test('cautions that are true of the site now are there', () => {
    const section = buildSection();
    const { text } = write({
      model: { fittedAt: briefNow - 60 * 86_400, areaIds: [] },
      calendar: [{ date: '2026-12-05', kind: 'local event', name: 'Lantern fair', statedEffect: null }],
      gaps: [{ area: null, from: section.lastWeek.from, to: section.lastWeek.from + 3600, reason: 'x' }],
    });
    expect(text).toContain('The model is 60 days old');
    expect(text).toContain('2026-12-05: Lantern fair (local event)');
    expect(text).toContain('A gap in the log last week, from Tue 24 Nov, 00:00 to Tue 24 Nov, 01:00');
    expect(text).toContain('Planning aid. Not for decisions about any individual patient.');
    expect(text).toContain('It does not foresee a major incident');
    expect(text).toContain('safe minimum');
  });

  test('of a group has a section for each site, and says which of them run short', () => {
    const quiet = buildSection();
    const shifts = quiet.outlook!.shifts.map((each) => ({ ...each, chance: 0.01, bedsToAdd: 0 }));
    const second = {
      ...quiet,
      site: { ...quiet.site, id: 'bay', name: 'Saltby Bay' },
      outlook: { ...quiet.outlook!, shifts },
    };
    const brief = writeBrief({ ...frame, name: 'Farrowmere', covers: 'group' }, [buildSection(), second]);
    expect(brief.subject).toBe('Farrowmere, weekly brief: Farrowmere General has shifts that are likely to run short.');
    expect(brief.text).toContain(
      'SALTBY BAY\nThe planned beds are enough for the planning risk in every shift of next week.',
    );
    expect(brief.html).toContain('https://shoalmark.example/sites/bay/week');
    expect(brief.pictures.map(({ cid }) => cid)).toEqual(
      expect.arrayContaining(['arrivals-1', 'arrivals-2', 'mark-r1']),
    );
    expect(brief.html.length).toBeLessThan(100_000);
  });

  test('text and HTML agree on every figure', () => {
    const figures = (text: string) => text.match(/\d[\d,]*(?: %)?/g) ?? [];
    const inHtml = new Set(figures(read(whole.html.replace(/alt="([^"]*)"/g, '>$1<'))));
    for (const figure of figures(whole.text.replace(/https:\S+/g, ''))) expect(inHtml).toContain(figure);
  });
});

/*
 * The check of mail HTML: what mail programs are known to drop or to mangle. Common practice, no source, but for the size (a
 * widely used mail program cuts messages off past 102 kB) and RFC 2392 (cid addresses).
 */
describe('the HTML part', () => {
  const { html, pictures } = whole;
  const body = html.slice(html.indexOf('<body'));

  test('is under 100 kB, and so are its pictures', () => {
    expect(Buffer.byteLength(html)).toBeLessThan(100_000);
    for (const { content } of pictures) expect(Buffer.from(content, 'base64').length).toBeLessThan(100_000);
  });

  test('uses only tags that mail programs keep', () => {
    const tags = new Set([...html.matchAll(/<([a-z0-9]+)/g)].map(([, tag]) => tag));
    const kept = 'html head meta title style body table tr td th h1 h2 p b br span div a img'.split(' ');
    for (const tag of tags) expect(kept).toContain(tag);
    expect(html).not.toMatch(/<(script|link|form|input|button|iframe|object|video|svg)\b|\son\w+=|javascript:/i);
  });

  test('lays out with tables and inline styles alone: nothing floats, is placed, or stretches', () => {
    expect(body).not.toMatch(/\b(float|position|display:\s*(flex|grid)|calc\(|var\(|@import|url\(|background-image)/);
    for (const [, style] of body.matchAll(/style="([^"]*)"/g)) expect(style).not.toMatch(/\b(rem|vw|vh)\b/);
    for (const [table] of body.matchAll(/<table\b[^>]*>/g)) {
      expect(table).toMatch(/cellpadding="0" cellspacing="0"/);
    }
    // A table without a header cell of its own only places things.
    expect((body.match(/role="presentation"/g) ?? []).length).toBeGreaterThanOrEqual(3);
  });

  test('stands without its style sheet: every text carries its face, and every ground stands in the attribute too', () => {
    for (const [tag] of body.matchAll(/<(?:h1|h2|p|th|td)\b[^>]*class="[^"]*ink[^>]*>/g)) {
      expect(tag).toMatch(/font-family:'Nunito Sans',Verdana,Arial,sans-serif/);
      expect(tag).toMatch(/color:#/);
    }
    for (const [tag] of body.matchAll(/<(?:body|table|td|th)\b[^>]*;background:#[^>]*>/g))
      expect(tag).toContain('bgcolor="#');
  });

  test('the style sheet does nothing but turn colours for a dark screen, and declares that it does', () => {
    const sheet = /<style>([^]*)<\/style>/.exec(html)?.[1].trim() ?? '';
    expect(sheet).toMatch(/^@media \(prefers-color-scheme: dark\) \{[^]*\}$/);
    const properties = new Set([...sheet.matchAll(/([a-z-]+): #/g)].map(([, property]) => property));
    expect([...properties].sort()).toEqual(['background', 'border-color', 'color']);
    expect(html).toContain('<meta name="color-scheme" content="light dark">');
    expect(html).toContain('<meta name="supported-color-schemes" content="light dark">');
  });

  test('every picture travels with it, has its width and an alternative, and nothing is fetched', () => {
    const images = [...html.matchAll(/<img\b[^>]*>/g)].map(([tag]) => tag);
    expect(images.length).toBeGreaterThan(1);
    for (const tag of images) {
      const cid = /src="cid:([\w-]+)"/.exec(tag)?.[1];
      expect(pictures.map((picture) => picture.cid)).toContain(cid);
      expect(tag).toMatch(/width="\d+"/);
      expect(tag).toMatch(/ alt="/);
    }
    const chart = images.find((tag) => tag.includes('arrivals-1')) ?? '';
    expect(chart).toMatch(/alt="Arrivals by day, middle figure and 95&#160;% range: Wed 2 Dec 100 \(85 to 115\)/);
    expect(html.match(/(?:src|href)="(?!cid:|https:\/\/shoalmark\.example\/|\{\{unsubscribe\}\}")/g)).toBeNull();
  });

  test('risk is number, mark and word, not tone alone', () => {
    const cells = [...html.matchAll(/<td bgcolor="#[^]*?<\/td>/g)].map(([cell]) => cell);
    expect(cells).toHaveLength(21);
    for (const cell of cells) {
      expect(cell).toMatch(/\d+&#160;% <img src="cid:mark-r[1-5]"/);
      expect(cell).toMatch(/>(Remote|Unlikely|Possible|Likely|Very likely)<\/span>/);
    }
  });

  test('names its language and title, keeps headings in order, and widths within a phone', () => {
    expect(html).toMatch(/<html lang="en">/);
    expect(html).toContain('name="viewport" content="width=device-width, initial-scale=1"');
    const levels = [...html.matchAll(/<h(\d)/g)].map(([, level]) => Number(level));
    expect(levels[0]).toBe(1);
    expect(levels.slice(1).every((level) => level === 2)).toBe(true);
    for (const [, width] of body.matchAll(/width:(\d+)px/g)) expect(Number(width)).toBeLessThanOrEqual(600);
    expect(body).not.toMatch(/(?<!max-)width:\s*\d+px/);
    expect(html.match(/font-size:(\d+)px/g)?.every((size) => Number(/\d+/.exec(size)?.[0]) >= 13)).toBe(true);
  });

  test('has one way out, of each recipient’s own, in both parts', () => {
    expect(html.split(unsubscribeMark)).toHaveLength(2);
    expect(whole.text.split(unsubscribeMark)).toHaveLength(2);
  });

  test('names with markup or line ends in them stay text', () => {
    const section = buildSection();
    const site = { ...section.site, name: 'General <b>"A&E"</b>\r\nBcc: x@h.example' };
    const brief = writeBrief({ ...frame, name: site.name, covers: 'group' }, [{ ...section, site }]);
    expect(brief.html).toContain('General &#60;b&#62;&#34;A&#38;E&#34;&#60;/b&#62;');
    expect(brief.subject).not.toMatch(/[\r\n]/);
  });
});

test('the message arrives as alternatives with the pictures related to the HTML', async () => {
  // mailparser reads it back, independent of what wrote it.
  const mail = await startMailServer();
  const line = await openMailLine({ smtpUrl: mail.smtpUrl, mailFrom: 'Shoalmark <brief@farrowmere.example>' });
  const { subject, html, text, pictures } = whole;
  const message = { id: 'brief-1', to: 'leitung@farrowmere.example', subject, html, text, pictures };
  await line.send({ ...message, unsubscribeUrl: 'https://shoalmark.example/mail/unsubscribe/a.b.c' }, () =>
    Promise.resolve(),
  );
  line.close();
  await mail.close();
  const got = await readMail(Buffer.from(mail.taken[0].raw));
  expect(got.subject).toBe(subject);
  expect(got.html?.trim()).toBe(html.trim());
  expect(got.text?.trim()).toBe(text.trim());
  expect(got.attachments.map(({ contentId }) => contentId)).toEqual(pictures.map(({ cid }) => cid));
  got.attachments.forEach(({ content, contentType }, index) => {
    expect(contentType).toBe('image/png');
    expect(content.equals(Buffer.from(pictures[index].content, 'base64'))).toBe(true);
  });
});

describe('pictures', () => {
  test('their colours are the day theme’s', () => {
    for (const [name, colour] of Object.entries(mailColours))
      expect(themes.light[name as keyof typeof themes.light]).toBe(colour);
  });

  test('letters are drawn: the font was read', () => {
    // PNG, third edition (W3C), 5 and 11: IHDR, then IDAT packed by zlib. Without a font only the bands would be there.
    const png = Buffer.from(whole.pictures.find(({ cid }) => cid === 'arrivals-1')!.content, 'base64');
    expect([...png.subarray(0, 8)]).toEqual([137, 80, 78, 71, 13, 10, 26, 10]);
    const width = png.readUInt32BE(16);
    const height = png.readUInt32BE(20);
    const parts: Buffer[] = [];
    for (let at = 8; at < png.length; at += 12 + png.readUInt32BE(at)) {
      if (png.toString('latin1', at + 4, at + 8) === 'IDAT')
        parts.push(png.subarray(at + 8, at + 8 + png.readUInt32BE(at)));
    }
    const bytes = inflateSync(Buffer.concat(parts));
    const row = bytes.length / height;
    expect(row).toBeGreaterThan(width);
    // The foot of the drawing holds nothing but letters: its rows are not all alike.
    const foot = Array.from({ length: 40 }, (_, index) =>
      bytes.subarray((height - 60 + index) * row, (height - 59 + index) * row).toString('latin1'),
    );
    expect(new Set(foot).size).toBeGreaterThan(10);
  });

  test('what is no WOFF file is refused', () => {
    expect(() => unpackWoff(Buffer.from('wOF2 and more'))).toThrow(RangeError);
  });
});
