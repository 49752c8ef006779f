import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Page } from 'playwright-core';
import { demoSeed, demoSites } from '../../demo/farrowmere.ts';
import { makeVisitLog } from '../../demo/make-visit-log.ts';
import { writeVisitCsv } from '../../demo/write-visit-csv.ts';
import { openBrowser, openPage, signIn, startBuiltDemo } from '../support/journey.ts';
import { milliseconds, single, type Bench, type Figure } from './measure.ts';

const site = demoSites[0];
const million = 1_000_000;
const rows = million.toLocaleString('en');
const patience = 300_000;

/** Collects what a progress bar shows while some work goes on. */
async function watchBar(page: Page, title: string, work: () => Promise<void>) {
  const shares = new Set<number>();
  let going = true;
  const watching = (async () => {
    while (going) {
      const bar = page.getByRole('progressbar', { name: title });
      const share = await bar.getAttribute('value', { timeout: 200 }).catch(() => null);
      if (share !== null) shares.add(Number(share));
      await page.waitForTimeout(100);
    }
  })();
  const took = await milliseconds(work);
  going = false;
  await watching;
  return { took, steps: shares.size };
}

/** Presses Cancel while a bar moves, and answers with the milliseconds until the walk is back where it came from. */
async function cancel(page: Page, back: () => Promise<unknown>): Promise<number> {
  await page.getByRole('progressbar').waitFor({ timeout: patience });
  await page.waitForTimeout(1500);
  return milliseconds(async () => {
    await page.getByRole('button', { name: 'Cancel' }).click();
    await back();
  });
}

/** A million visits from a file on the steward's computer to an accepted log, in headless Chromium on the built demo. */
async function benchBrowserUpload(): Promise<Figure[]> {
  const folder = mkdtempSync(join(tmpdir(), 'shoalmark-bench-'));
  const demo = await startBuiltDemo();
  const browser = await openBrowser();
  try {
    const now = Math.floor(Date.now() / 1000) - 3600;
    const file = join(folder, 'million.csv');
    const visits = makeVisitLog({ site, from: now - 3900 * 86_400, to: now, seed: demoSeed + 1 }).slice(-million);
    writeFileSync(file, writeVisitCsv(visits, site.areas));
    const { page } = await openPage(browser);
    await signIn(page, demo.url, 'steward', `/sites/${site.id}/logs/new`);
    const choose = async () => {
      await page.locator('input[type=file]').setInputFiles(file);
    };
    await choose();
    const cancelRead = await cancel(page, () => page.getByRole('button', { name: 'Choose a file' }).waitFor());

    const read = await watchBar(page, 'Reading the file', async () => {
      await choose();
      await page
        .getByRole('heading', { name: `${rows} rows: say what each column holds.` })
        .waitFor({ timeout: patience });
    });
    const startCheck = () => page.getByRole('button', { name: `Check ${rows} rows` }).click();
    await startCheck();
    const cancelCheck = await cancel(page, () => page.getByRole('button', { name: `Check ${rows} rows` }).waitFor());
    const check = await watchBar(page, 'Checking every row', async () => {
      await startCheck();
      await page.getByRole('form', { name: 'About the extract' }).waitFor({ timeout: patience });
    });

    await page.getByLabel('Those that arrived in its period').check();
    await page.getByLabel('The patient registered at the desk').check();
    await page.getByLabel('The area of the longest stay').check();
    const unknown = page.getByLabel('It is unknown when the patient left');
    if ((await unknown.count()) > 0) await unknown.check();
    const load = page.getByRole('button', { name: /^Send and load/ });
    await load.click();
    const cancelSend = await cancel(page, () => load.waitFor());
    const send = await watchBar(page, 'Sending the visits', async () => {
      await load.click();
      await page.waitForURL(/\/logs\/[\w-]+$/, { timeout: patience });
    });
    const seconds = (name: string, took: number, goal?: number) =>
      single({ name, unit: 's', better: 'lower', ...(goal === undefined ? {} : { goal }) }, took / 1000);
    const steps = (name: string, count: number) => single({ name, unit: 'steps', better: 'higher', goal: 3 }, count);
    return [
      seconds(`browser: reading ${rows} rows and screening them`, read.took),
      steps('browser: the bar moved while reading', read.steps),
      seconds('browser: cancel while reading', cancelRead, 1),
      seconds(`browser: checking ${rows} rows and packing them`, check.took),
      steps('browser: the bar moved while checking', check.steps),
      seconds('browser: cancel while checking', cancelCheck, 1),
      seconds(`browser: sending ${rows} rows and the server’s own check`, send.took),
      seconds('browser: cancel while sending', cancelSend, 1),
    ];
  } finally {
    await browser.close();
    await demo.stop();
    rmSync(folder, { recursive: true, force: true });
  }
}

export const browserBenches: Bench[] = [{ name: 'browser-upload', run: benchBrowserUpload }];
