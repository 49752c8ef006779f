import { existsSync, readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { canonicalHeader } from '../../shared/domain/canonical-visit.ts';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import { openBrowser, openPage, signIn, startBuiltDemo, type RunningDemo } from '../support/journey.ts';
import { makeMessyExport } from '../support/make-messy-export.ts';

const site = '/sites/saltby-bay';
// London went back to GMT at 01:00 UTC on 25 October 2026: 01:00 to 02:00 on the wall came twice (IANA time zone data).
const repeatedAt = Date.parse('2026-10-25T00:30:00Z') / 1000;
const messy = makeMessyExport(makeZone('Europe/London'), Date.parse('2026-10-18T08:00:00Z') / 1000, repeatedAt);

/** Runs in the page: hands every Blob that a request carries to the test. */
const keepBlobs = `{
  const send = XMLHttpRequest.prototype.send;
  XMLHttpRequest.prototype.send = function (body) {
    if (body instanceof Blob) {
      const reader = new FileReader();
      reader.onload = () => void keepSent(reader.result.split(',')[1]);
      reader.readAsDataURL(body);
    }
    send.call(this, body);
  };
}`;

const choose = (page: Page, name: string, buffer: Buffer, mimeType = 'text/csv') =>
  page.locator('input[type=file]').setInputFiles({ name, mimeType, buffer });

describe('the data steward’s walk, in a real browser on the built demo', () => {
  let demo: RunningDemo;
  let browser: Browser;

  beforeAll(async () => {
    expect(existsSync('dist/client/index.html'), 'the client is built before the tests (npm test does it)').toBe(true);
    demo = await startBuiltDemo();
    browser = await openBrowser();
  });
  afterAll(async () => {
    await browser.close();
    await demo.stop();
  });

  it('takes a messy file from a computer to a loaded log, and back', async () => {
    const { page, noise } = await openPage(browser);
    /** Everything that the page sends with a body, unpacked where it is packed. */
    const sent: string[] = [];
    page.on('request', (request) => {
      const body = request.postDataBuffer();
      if (body) sent.push(body.toString());
    });
    // The browser does not tell a tester what a Blob held; the page's own call does.
    await page.exposeFunction('keepSent', (base64: string) => {
      const body = Buffer.from(base64, 'base64');
      sent.push((body[0] === 0x1f && body[1] === 0x8b ? gunzipSync(body) : body).toString());
    });
    await page.addInitScript({ content: keepBlobs });
    await signIn(page, demo.url, 'steward', `${site}/logs/new`);
    sent.length = 0;

    // A file that cannot be read says what it is.
    await choose(page, 'visits.pdf', Buffer.from('%PDF-1.7 and so on'));
    await page.getByText('This is a PDF document, not CSV. Export the visits as CSV.').waitFor();

    // Dates of birth in place of arrivals refuse the file, here and before anything is sent.
    const births = 'Arrival,Unit\n01/02/1950 00:00,Acute\n13/03/2026 10:00,Acute\n';
    await choose(page, 'births.csv', Buffer.from(births));
    await page.getByRole('button', { name: 'Check 2 rows' }).click();
    await page.getByText('The file cannot be taken as it is. Nothing was sent.').waitFor();
    await page.getByText('1 row looks like a date of birth.').waitFor();
    await page.getByRole('button', { name: 'Choose another file' }).click();

    // The messy one: what identifies patients cannot be chosen, spellings are one question.
    await choose(page, 'ED October.csv', messy.bytes);
    await page.getByRole('heading', { name: `${String(messy.rows)} rows: say what each column holds.` }).waitFor();
    const dropped = await page.getByRole('region', { name: 'Columns that are dropped' }).innerText();
    for (const [column, kind] of [
      ['Pt Name', 'a name'],
      ['Hospital No', 'a record number'],
      ['DOB', 'a date of birth'],
      ['Complaint', 'free text'],
    ])
      expect(dropped).toMatch(new RegExp(`${column}: its name says that it holds ${kind}, so it cannot be chosen`));
    expect(await page.getByText('also written').count()).toBeGreaterThanOrEqual(2);
    expect(await page.getByLabel('Care areas: “XRAY” means').inputValue()).toBe('leave out');
    await page.getByRole('button', { name: `Check ${String(messy.rows)} rows` }).click();

    await page.getByRole('heading', { name: /have a problem|has a problem/ }).waitFor();
    await page.getByLabel('The second of the two hours').check();
    const good = String(messy.goodRows);
    await page.getByRole('button', { name: `Send and load ${good} visits` }).waitFor();
    const problems = await page.getByRole('table', { name: 'Problem rows, by kind' }).innerText();
    for (const words of [
      'The time lies before the arrival.',
      'The care area is not one of the site’s.',
      'The row has more or fewer fields than the header.',
    ])
      expect(problems).toContain(words);
    const [download] = await Promise.all([
      page.waitForEvent('download'),
      page.getByRole('button', { name: 'Save all problem rows as CSV' }).click(),
    ]);
    const saved = readFileSync(await download.path(), 'utf8')
      .trim()
      .split(/\r?\n/);
    expect(saved[0]).toBe('row,column,kind');
    expect(new Set(saved.slice(1).map((line) => line.split(',')[0]))).toEqual(
      new Set(['51', '52', '301', '302', '303', '351']),
    );
    expect(sent).toEqual([]);

    // A send that is cancelled keeps the answers.
    await page.getByLabel('Those that arrived in its period').check();
    await page.getByLabel('The patient registered at the desk').check();
    await page.getByLabel('The longest').or(page.getByLabel('The area of the longest stay')).check();
    await page.getByLabel('When was the extract taken?').fill('2026-11-09T07:00');
    await page.getByLabel('It is unknown when the patient left').check();
    await page.getByLabel(`Load the ${good} good rows and leave out 6 problem rows`).check();
    let letThrough = () => {};
    const held = new Promise<void>((resolve) => (letThrough = resolve));
    await page.route('**/visit-logs/checks**', async (route) => {
      await held;
      await route.abort().catch(() => undefined);
    });
    await page.getByRole('button', { name: `Send and load ${good} visits` }).click();
    await page.getByRole('button', { name: 'Cancel' }).click();
    letThrough();
    await page.unroute('**/visit-logs/checks**');
    expect(await page.getByLabel('The patient registered at the desk').isChecked()).toBe(true);
    expect(await page.getByLabel('When was the extract taken?').inputValue()).toBe('2026-11-09T07:00');
    sent.length = 0;
    await page.getByRole('button', { name: `Send and load ${good} visits` }).click();
    await page.waitForURL(/\/logs\/[\w-]+$/);
    await page.getByRole('heading', { level: 1, name: `${good} visits count.` }).waitFor({ timeout: 30_000 });

    // Only the mapped columns of the good rows went out.
    const csv = sent.find((body) => body.startsWith(canonicalHeader)) ?? '';
    expect(csv.trim().split('\n')).toHaveLength(messy.goodRows + 1);
    for (const secret of messy.secrets) expect(sent.join('\n')).not.toContain(secret);
    // The second of the two hours.
    expect(csv).toContain('2026-10-25T01:30:00Z,');

    // The next file of the site is mapped as this one was.
    await page.goto(`${demo.url}${site}/logs/new`);
    await choose(page, 'ED October again.csv', messy.bytes);
    await page.getByText('Mapped as the last file was').waitFor();
    await page.getByRole('button', { name: 'Choose another file' }).click();

    // A workbook and FHIR Encounters go the same way.
    await choose(page, 'visits.xlsx', readFileSync('tests/reference/visits.xlsx'), 'application/octet-stream');
    await page.getByText('Only the first sheet, “Visits & stays”, was read.').waitFor();
    await page.getByRole('button', { name: 'Choose another file' }).click();
    const encounter = (code: string, display: string) =>
      JSON.stringify({
        resourceType: 'Encounter',
        status: 'finished',
        class: { code },
        subject: { display: 'Fairweather, Olivia' },
        period: { start: '2026-10-20T10:00:00Z', end: '2026-10-20T13:00:00Z' },
        location: [{ location: { display } }],
      });
    const lines = [encounter('EMER', 'Acute'), encounter('EMER', 'Acute'), encounter('AMB', 'Clinic')].join('\n');
    await choose(page, 'encounters.ndjson', Buffer.from(lines), 'application/octet-stream');
    await page.getByRole('heading', { name: '2 rows: say what each column holds.' }).waitFor();
    await page.getByText('1 Encounter is left out here.').waitFor();
    await page.getByRole('button', { name: 'Check 2 rows' }).click();
    await page.getByRole('heading', { name: 'All 2 rows are good.' }).waitFor();

    // Taken back, with a reason; leaving the walk asks first.
    await page.getByRole('link', { name: 'All logs' }).click();
    await page.getByRole('button', { name: /leave/i }).click();
    await page
      .getByRole('row', { name: /ED October/ })
      .first()
      .getByRole('link')
      .click();
    await page.getByRole('button', { name: 'Withdraw this log' }).click();
    await page.getByLabel('Reason').fill('The export was of the wrong month');
    await page.getByRole('button', { name: `Withdraw ${good} visits` }).click();
    await page.getByRole('heading', { name: 'This log is withdrawn.' }).waitFor();
    await page.getByText('“The export was of the wrong month”').waitFor();
    // A request that the browser was told to break off is no fault of the page.
    expect(noise.filter((line) => !line.includes('ERR_FAILED'))).toEqual([]);
    for (const secret of messy.secrets) expect(demo.output()).not.toContain(secret);
  });
});
