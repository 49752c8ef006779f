import ICAL from 'ical.js';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { openBrowser, openPage, signIn, startBuiltDemo, type RunningDemo } from '../support/journey.ts';

const site = '/sites/farrowmere-general';

describe('the operations manager’s desk, in a real browser on the built demo', () => {
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

  it('tries a plan by keyboard, confirms it, adopts it, and subscribes a calendar', async () => {
    const { page, noise } = await openPage(browser);
    await signIn(page, demo.url, 'operations', `${site}/what-if`);
    await page.getByRole('heading', { name: 'Side by side' }).waitFor();

    // A drag by the arrow keys is answered at once.
    await page.getByRole('button', { name: 'Add it' }).click();
    const headline = () => page.getByRole('heading', { level: 1 }).innerText();
    const slider = page.getByLabel('Beds more (+) or fewer (−)', { exact: true });
    await slider.focus();
    await slider.press('ArrowRight');
    await slider.press('ArrowRight');
    expect(await headline()).toMatch(/^With this plan the worst hour/);
    await page.getByText(/^Answered in \d+ ms by the exact method/).waitFor();

    // Saved and confirmed in the background, then adopted with a reason.
    await page.getByLabel('Name of the plan').fill('More beds in the worst shift');
    await page.getByRole('button', { name: 'Save and confirm' }).click();
    await page.getByRole('button', { name: 'Adopt these beds' }).waitFor({ timeout: 150_000 });
    await page.getByText(/pairs of weeks, each once as it is and once with the plan/).waitFor();
    await page.getByRole('button', { name: 'Adopt these beds' }).click();
    await page.getByText('Say why, in at least 3 characters.').waitFor();
    await page.getByLabel('Reason').fill('Agreed at the bed meeting');
    await page.getByRole('button', { name: 'Adopt these beds' }).click();
    await page
      .getByText(/^Adopted .* made in the staffed-bed plan|^Adopted /)
      .first()
      .waitFor();

    // A calendar program reads the feed at its secret address.
    await page.getByLabel('Which calendar will read it').fill('Bed meeting calendar');
    await page.getByRole('button', { name: 'Make an address' }).click();
    const address = await page.getByLabel('Address to subscribe to').inputValue();
    const reply = await fetch(address);
    expect(reply.headers.get('content-type')).toBe('text/calendar; charset=utf-8');
    const calendar = new ICAL.Component(ICAL.parse(await reply.text()) as unknown[]);
    const events = calendar.getAllSubcomponents('vevent').map((one) => new ICAL.Event(one));
    expect(events.length).toBeGreaterThan(0);
    for (const { description } of events) expect(description).toContain('Planning aid.');
    await page.getByRole('button', { name: 'I have kept it' }).click();
    await page.getByRole('button', { name: 'Revoke “Bed meeting calendar”' }).click();
    await page.getByRole('button', { name: 'Revoke the address' }).click();
    await page.getByText(/^Revoked /).waitFor();
    expect((await fetch(address)).status).toBe(404);

    expect(noise).toEqual([]);
  });
});
