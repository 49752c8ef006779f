import { existsSync } from 'node:fs';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { openBrowser, openPage, signIn, startBuiltDemo, type RunningDemo } from '../support/journey.ts';
import { unpackReference } from '../support/read-reference-log.ts';

const site = '/sites/saltby-bay';

describe('the main job, in a real browser on the built demo', () => {
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

  it('goes from a file that the demo has never seen to a changed Tonight', async () => {
    // A data steward maps and loads a raw export, and fits a candidate.
    const steward = await openPage(browser);
    await signIn(steward.page, demo.url, 'steward', `${site}/logs/new`);
    await steward.page.locator('input[type=file]').setInputFiles({
      name: 'clinic export.csv',
      mimeType: 'text/csv',
      buffer: Buffer.from(unpackReference('raw-export.csv.gz')),
    });
    const choose = (ours: string, column: string) =>
      steward.page.getByLabel(`Column of the file for ${ours}`, { exact: true }).selectOption({ label: column });
    await steward.page.getByText('Which column is which').waitFor();
    await choose('Arrival', 'Booked in');
    await choose('Bed space', 'First cubicle');
    await choose('Admission decision', 'Bed requested');
    await choose('Departure', 'Left department');
    await choose('Care area', 'Zone');
    await choose('Disposition', 'Leaving route');
    await choose('By ambulance', 'Brought by ambulance');
    await steward.page.getByRole('button', { name: /^Check / }).click();
    await steward.page.getByLabel('The second of the two hours').check();
    await steward.page.getByLabel('Those that arrived in its period').check();
    await steward.page.getByLabel('The patient registered at the desk').check();
    await steward.page.getByLabel('The first area').check();
    await steward.page.getByLabel('When was the extract taken?').fill('2026-03-30T00:00');
    await steward.page.getByLabel('The patient was still present when the extract was taken').check();
    await steward.page.getByRole('button', { name: /^Send and load / }).click();
    await steward.page.waitForURL(/\/logs\/[\w-]+$/);
    await steward.page.getByText('6,689').first().waitFor();
    await steward.page.goto(`${demo.url}${site}/models`);
    await steward.page.getByRole('button', { name: 'Fit a candidate model' }).click();
    await steward.page.getByRole('link', { name: 'Candidate' }).waitFor({ timeout: 60_000 });

    // An operations manager approves it.
    const operations = await openPage(browser);
    await signIn(operations.page, demo.url, 'operations', `${site}/models`);
    await operations.page
      .getByRole('link', { name: /candidate|fitted/i })
      .first()
      .click();
    await operations.page.getByLabel('Reason').fill('Newest visits are in it; rates look right');
    await operations.page.getByRole('button', { name: 'Approve and put into use' }).click();
    await operations.page.getByRole('heading', { name: /in use/ }).waitFor();

    // A charge nurse enters a census, and Tonight changes.
    const charge = await openPage(browser, { viewport: { width: 820, height: 1180 }, colorScheme: 'dark' });
    await signIn(charge.page, demo.url, 'charge', `${site}/tonight`);
    const chances = () => charge.page.getByRole('table').first().innerText();
    const before = await chances();
    await charge.page.getByLabel('Acute, present').fill('19');
    await charge.page.getByLabel('Acute, waiting').fill('5');
    await charge.page.getByLabel('Acute, boarding').fill('6');
    await charge.page.getByRole('button', { name: 'Save census' }).first().click();
    await expect.poll(chances, { timeout: 15_000 }).not.toBe(before);
    expect(await charge.page.getByRole('heading', { level: 1 }).innerText()).toMatch(/Acute/);

    expect([...steward.noise, ...operations.noise, ...charge.noise]).toEqual([]);
  });
});
