import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { openBrowser, openPage, signIn, startBuiltDemo, type RunningDemo } from '../support/journey.ts';

const mostStops = 120;

/** Name of what has the focus, as a reader of the page would hear it. */
function focusedName(page: Page): Promise<string> {
  return page.evaluate(
    "(() => { const e = document.activeElement; return e === null ? '' : (e.getAttribute('aria-label') ?? e.labels?.[0]?.textContent ?? e.textContent ?? '').trim(); })()",
  );
}

/** True where what has the focus lies within the view, under nothing else (WCAG 2.2, 2.4.11). */
function focusIsInView(page: Page): Promise<boolean> {
  return page.evaluate(`(() => {
    const focused = document.activeElement;
    const box = focused.getBoundingClientRect();
    const top = document.elementFromPoint(box.left + Math.min(box.width / 2, 30), box.top + box.height / 2);
    return top !== null && (focused.contains(top) || top.contains(focused));
  })()`);
}

/** Presses Tab until the focus stands on what is named so. */
async function tabTo(page: Page, name: RegExp): Promise<void> {
  const passed: string[] = [];
  for (let stop = 0; stop < mostStops; stop += 1) {
    await page.keyboard.press('Tab');
    const now = await focusedName(page);
    if (name.test(now)) {
      expect(await focusIsInView(page), `${now} has the focus but cannot be seen`).toBe(true);
      return;
    }
    passed.push(now);
  }
  throw new Error(`Tab never came to ${String(name)}; it passed ${passed.join(' | ')}`);
}

describe('Tonight by keyboard alone, on a tablet in the night theme', () => {
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

  it('counts, acknowledges what it then says, and comes to the handover sheet', async () => {
    const { page, noise } = await openPage(browser, { viewport: { width: 820, height: 1180 }, colorScheme: 'dark' });
    await signIn(page, demo.url, 'charge', '/sites/saltby-bay/tonight');
    await page.locator('.night-board').waitFor();

    await tabTo(page, /^Acute, present/);
    await page.keyboard.type('25');
    await page.keyboard.press('Tab');
    expect(await focusedName(page)).toMatch(/^Acute, waiting/);
    await page.keyboard.type('8');
    await page.keyboard.press('Tab');
    await page.keyboard.type('6');
    await page.keyboard.press('Enter');
    await page.getByText(/^Census saved at/).waitFor();
    await expect.poll(() => page.getByRole('heading', { level: 1 }).innerText()).toMatch(/Acute/);

    // The panel that hangs from the area's first hour past its limit: what was done, and Enter.
    await tabTo(page, /^What was done/);
    await page.keyboard.type('Opened the corridor team, told the site manager');
    await page.keyboard.press('Enter');
    await page.getByText('Opened the corridor team, told the site manager').first().waitFor();
    await page
      .getByText(/Acknowledged/)
      .first()
      .waitFor();

    await tabTo(page, /^Print$/);
    await page.keyboard.press('Enter');
    await page.waitForURL(/\/handover$/);
    await page.getByText('Opened the corridor team, told the site manager').first().waitFor();
    expect(noise).toEqual([]);
  });
});
