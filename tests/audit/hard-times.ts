import type { Browser, BrowserContextOptions, Page, Route } from 'playwright-core';
import { openPage } from '../support/journey.ts';
import { interactionCounter, layoutShift, shiftCounter, worstInteraction } from './measure.ts';
import type { AuditedPage } from './pages.ts';

/** Beyond this a reader sees the page jump. */
const mostShift = 0.02;
/** Interaction to next paint, ms, with the processor four times slower. */
const longestInteraction = 200;
const slowness = 1200;

type Options = BrowserContextOptions;

/** Every question of the page but whose session it is; what it asks before it is the page cannot be tried again on it. */
const asked = (address: URL) => address.pathname.startsWith('/api/') && !address.pathname.startsWith('/api/session');

async function opened(browser: Browser, options: Options) {
  const { page } = await openPage(browser, {
    viewport: { width: 1440, height: 1000 },
    reducedMotion: 'reduce',
    // What the page keeps on the device would answer in the server’s place.
    serviceWorkers: 'block',
    ...options,
  });
  await page.addInitScript(shiftCounter);
  await page.addInitScript(interactionCounter);
  return page;
}

/** The server fails, then recovers: the page says so with a way to try again, and comes back by it. */
async function whenItFails(
  browser: Browser,
  address: string,
  audited: AuditedPage,
  options: Options,
): Promise<string[]> {
  const page = await opened(browser, options);
  const refuse = (route: Route) => route.fulfill({ status: 503, contentType: 'text/plain', body: 'down' });
  try {
    await page.route(asked, refuse);
    await page.goto(address);
    const again = page.locator('main, body').getByRole('button', { name: 'Try again' }).first();
    const shown = await again.waitFor({ timeout: 20_000 }).then(
      () => true,
      () => false,
    );
    if (!shown) {
      // A page that asks nothing has nothing to fail.
      const stands = await page.locator(audited.ready).first().isVisible();
      return stands ? [] : ['no way to try again when the server fails'];
    }
    await page.unroute(asked, refuse);
    for (let press = 0; press < 6; press += 1) {
      const left = page.getByRole('button', { name: 'Try again' });
      if ((await left.count()) === 0) break;
      await left.first().click();
      await page.waitForLoadState('networkidle');
    }
    const back = await page
      .locator(audited.ready)
      .first()
      .waitFor({ timeout: 20_000 })
      .then(
        () => true,
        () => false,
      );
    return back ? [] : ['does not come back by trying again'];
  } finally {
    await page.context().close();
  }
}

/** The server is slow: something holds the place of what is coming, and nothing jumps when it comes. */
async function whenItIsSlow(
  browser: Browser,
  address: string,
  audited: AuditedPage,
  options: Options,
): Promise<string[]> {
  const page = await opened(browser, options);
  const found: string[] = [];
  try {
    let asks = 0;
    await page.route(asked, async (route) => {
      asks += 1;
      await new Promise((resolve) => setTimeout(resolve, slowness));
      await route.continue().catch(() => undefined);
    });
    await page.goto(address);
    await page.locator('#root *').first().waitFor();
    const held = await page
      .locator('[data-loading]')
      .first()
      .waitFor({ state: 'attached', timeout: 5000 })
      .then(
        () => true,
        () => false,
      );
    await page.locator(audited.ready).first().waitFor();
    await page.waitForLoadState('networkidle');
    if (!held && asks > 0) found.push('nothing holds the place of what is loading');
    const shift = await layoutShift(page);
    if (shift >= mostShift) found.push(`layout shift ${shift.toFixed(3)} when the server is slow`);
    return found;
  } finally {
    await page.context().close();
  }
}

/** Ordinary presses, none of which saves anything. */
async function press(page: Page): Promise<void> {
  const tries: (() => Promise<unknown>)[] = [
    () => page.getByRole('button', { name: 'More' }).click({ timeout: 2000 }),
    () => page.keyboard.press('Escape'),
    () => page.locator('main summary').first().click({ timeout: 2000 }),
    () => page.locator('main th button').first().click({ timeout: 2000 }),
    () => page.locator('main [role=slider]').first().press('ArrowRight', { timeout: 2000 }),
    () => page.locator('main [aria-expanded]').first().click({ timeout: 2000 }),
    () => page.locator('main input[type=search], main input[inputmode=numeric]').first().press('1', { timeout: 2000 }),
  ];
  for (const one of tries) {
    // Not every page has every part.
    await one().catch(() => undefined);
    await page.waitForTimeout(250);
  }
}

async function whenTheDeviceIsSlow(browser: Browser, address: string, audited: AuditedPage, options: Options) {
  const page = await opened(browser, options);
  try {
    await page.goto(address);
    await page.locator(audited.ready).first().waitFor();
    await page.waitForLoadState('networkidle');
    const session = await page.context().newCDPSession(page);
    await session.send('Emulation.setCPUThrottlingRate', { rate: 4 });
    await press(page);
    const worst = await worstInteraction(page);
    return worst.duration >= longestInteraction
      ? [`${worst.name} took ${String(Math.round(worst.duration))} ms to the next paint on a slow device`]
      : [];
  } finally {
    await page.context().close();
  }
}

/** What a page does when its server fails or is slow, or the device is. */
export async function hardTimes(
  browser: Browser,
  address: string,
  audited: AuditedPage,
  options: Options,
): Promise<string[]> {
  return [
    ...(await whenItFails(browser, address, audited, options)),
    ...(await whenItIsSlow(browser, address, audited, options)),
    ...(await whenTheDeviceIsSlow(browser, address, audited, options)),
  ];
}
