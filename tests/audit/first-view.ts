import type { Browser, BrowserContextOptions } from 'playwright-core';
import { openPage } from '../support/journey.ts';

/**
 * The throttled tablet: 820 × 1180 px, a processor at half this machine's speed, a ward's wireless network at 10 Mbit/s down,
 * 5 Mbit/s up and 40 ms there and back. Common practice, no source: what a three-year-old tablet meets two walls from the
 * access point.
 */
const throttledTablet = {
  viewport: { width: 820, height: 1180 },
  processorSlowness: 2,
  downloadBytesPerSecond: 10_000_000 / 8,
  uploadBytesPerSecond: 5_000_000 / 8,
  latencyMilliseconds: 40,
} as const;
/** From pressing Enter in the address to the board on the screen, ms. */
export const longestFirstView = 1500;

/**
 * Milliseconds from the start of the navigation to the first frame with the night board in it, on the throttled tablet with
 * an empty cache and no service worker: the middle of `times` visits, each in a browser context of its own.
 */
export async function firstViewOfTonight(
  browser: Browser,
  address: string,
  storageState: NonNullable<BrowserContextOptions['storageState']>,
  times = 5,
): Promise<number> {
  const taken: number[] = [];
  for (let visit = 0; visit < times; visit += 1) {
    const { page } = await openPage(browser, {
      viewport: throttledTablet.viewport,
      colorScheme: 'dark',
      serviceWorkers: 'block',
      storageState,
    });
    try {
      await page.addInitScript(`
        window.boardAt = new Promise((resolve) => {
          const look = () => {
            if (document.querySelector('.night-board')) requestAnimationFrame(() => setTimeout(() => resolve(performance.now())));
            else requestAnimationFrame(look);
          };
          look();
        });
      `);
      const session = await page.context().newCDPSession(page);
      await session.send('Network.enable');
      await session.send('Network.setCacheDisabled', { cacheDisabled: true });
      await session.send('Network.emulateNetworkConditions', {
        offline: false,
        latency: throttledTablet.latencyMilliseconds,
        downloadThroughput: throttledTablet.downloadBytesPerSecond,
        uploadThroughput: throttledTablet.uploadBytesPerSecond,
      });
      await session.send('Emulation.setCPUThrottlingRate', { rate: throttledTablet.processorSlowness });
      await page.goto(address);
      taken.push(await page.evaluate<number>('window.boardAt'));
    } finally {
      await page.context().close();
    }
  }
  return taken.sort((a, b) => a - b)[Math.floor(taken.length / 2)];
}
