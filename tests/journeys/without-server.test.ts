import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { openBrowser, openPage, signIn, startBuiltDemo, type RunningDemo } from '../support/journey.ts';

let demo: RunningDemo;
let browser: Browser;

beforeAll(async () => {
  demo = await startBuiltDemo();
  browser = await openBrowser();
});
afterAll(async () => {
  await browser.close();
  await demo.stop();
});

it('keeps the last good outlook readable across a reload without the server, for whom it belongs to', async () => {
  const { page } = await openPage(browser, { viewport: { width: 820, height: 1180 }, colorScheme: 'dark' });
  // Leaving with a census that is not saved is asked about by the browser.
  page.on('dialog', (dialog) => void dialog.accept());
  await signIn(page, demo.url, 'charge', '/sites/saltby-bay/tonight');
  await page.locator('.night-board').waitFor();
  const headline = await page.getByRole('heading', { level: 1 }).innerText();
  await page.waitForFunction("navigator.serviceWorker.ready.then(() => caches.match('/')).then(Boolean)");
  expect(
    await page.evaluate(
      "caches.keys().then(async (names) => (await Promise.all(names.map(async (name) => (await (await caches.open(name)).keys()).map(({ url }) => url)))).flat().filter((url) => url.includes('/api/')))",
    ),
  ).toEqual([]);

  await page.getByLabel('Acute, present').fill('23');
  await demo.pause();
  await page.reload();
  await page.locator('.night-board').waitFor();
  expect(await page.getByRole('heading', { level: 1 }).innerText()).toBe(headline);
  const note = page.getByRole('alert').filter({ hasText: 'Nothing can be saved until the server answers' });
  await note.waitFor();
  expect(await note.innerText()).toMatch(
    /This device kept the outlook of \d\d:\d\d, (under a minute|\d+ min(utes?)?) old/,
  );
  expect(await page.getByLabel('Acute, present').inputValue()).toBe('23');
  await page.getByRole('button', { name: 'Save census' }).last().click();
  await page.getByText('Your figures are still in the fields.').first().waitFor();
  expect(await page.getByLabel('Acute, present').inputValue()).toBe('23');

  // The handover sheet says the same, on the screen and on paper.
  await page.getByRole('link', { name: 'Print', exact: true }).click();
  await page.getByRole('button', { name: 'Leave without saving' }).click();
  await page.waitForURL(/\/handover$/);
  await page.getByText('Nothing can be saved until the server answers').waitFor();
  await page.getByRole('link', { name: 'Back to Tonight' }).click();

  // The server is back: the page notices by itself, and what was typed is saved.
  await demo.resume();
  await note.waitFor({ state: 'detached', timeout: 60_000 });
  await page.getByRole('button', { name: 'Save census' }).last().click();
  await page.getByText(/^Census saved at/).waitFor();

  // Signed out, nothing is left on the device for whoever comes next.
  await page.getByText('More', { exact: true }).click();
  await page.getByRole('button', { name: 'Sign out', exact: true }).click();
  await page.waitForURL(/\/sign-in/);
  expect(await page.evaluate("Object.keys(localStorage).filter((key) => key.startsWith('kept:'))")).toEqual([]);
  await demo.pause();
  await page.goto(`${demo.url}/sites/saltby-bay/tonight`);
  await page.getByText('The server cannot be reached').first().waitFor();
  expect(await page.getByText(headline).count()).toBe(0);
  await demo.resume();
});
