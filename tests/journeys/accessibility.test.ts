import type { Browser, BrowserContextOptions } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { axeFindings } from '../audit/measure.ts';
import { openBrowser, openPage, signIn, startBuiltDemo, type RunningDemo } from '../support/journey.ts';

// Source of the rules: WCAG 2.2, levels A and AA, as axe-core tests them. `npm run audit` looks at every page and width.
const site = '/sites/saltby-bay';
const pages = [
  { name: 'Tonight', username: 'charge', path: `${site}/tonight`, ready: '.night-board' },
  { name: 'Logs', username: 'steward', path: `${site}/logs`, ready: 'main h1' },
  { name: 'Arrival models', username: 'operations', path: `${site}/models`, ready: 'main h1' },
  { name: 'How the numbers are made', username: 'charge', path: '/how', ready: '#sources' },
  { name: 'Sign-in', username: null, path: '/sign-in', ready: 'a[href^="/auth/sign-in"]' },
] as const;

describe('accessibility of the built pages', () => {
  let demo: RunningDemo;
  let browser: Browser;
  const sessions = new Map<string, NonNullable<BrowserContextOptions['storageState']>>();

  beforeAll(async () => {
    demo = await startBuiltDemo();
    browser = await openBrowser();
    for (const username of ['charge', 'steward', 'operations']) {
      const { page } = await openPage(browser);
      await signIn(page, demo.url, username);
      sessions.set(username, await page.context().storageState());
      await page.context().close();
    }
  });
  afterAll(async () => {
    await browser.close();
    await demo.stop();
  });

  it.each(pages.flatMap((page) => (['light', 'dark'] as const).map((theme) => ({ ...page, theme }))))(
    '$name, $theme: axe finds nothing',
    async ({ username, path, ready, theme }) => {
      const storageState = username === null ? undefined : sessions.get(username);
      const { page, noise } = await openPage(browser, {
        viewport: { width: 820, height: 1180 },
        colorScheme: theme,
        ...(storageState ? { storageState } : {}),
      });
      await page.goto(demo.url + path);
      await page.locator(ready).first().waitFor();
      await page.waitForLoadState('networkidle');
      expect(await axeFindings(page)).toEqual([]);
      expect(noise).toEqual([]);
      await page.context().close();
    },
  );
});
