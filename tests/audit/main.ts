import { mkdirSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { parseArgs } from 'node:util';
import type { Browser, BrowserContextOptions, Page } from 'playwright-core';
import { openBrowser, openPage, signIn, startBuiltDemo } from '../support/journey.ts';
import { hardTimes } from './hard-times.ts';
import { axeFindings, layoutShift, scriptMeter, shiftCounter, sidewaysOverflow } from './measure.ts';
import { auditedPages, type AuditedPage } from './pages.ts';

/**
 * `npm run audit`, after a build: every page in three widths and two themes. Pictures go to test-output/audit; findings
 * are printed and end the run with 1. `-- --only NAME` looks at the pages whose names hold NAME (several: commas between);
 * `--url ADDRESS` at a demo that is running already, whatever it was built from; `--to FOLDER` puts the pictures
 * elsewhere; `--pictures` takes pictures and measures nothing; `--hard` tries only a failing and a slow server and a slow
 * device (timings are worth something only with nothing else running).
 */
const widths = [390, 820, 1440] as const;
const themes = ['light', 'dark'] as const;
/** Beyond this a reader sees the page jump. */
const mostShift = 0.02;
/** Scripts of a first load, compressed, bytes. */
const mostScript = 220_000;
const { values: asked } = parseArgs({
  options: {
    only: { type: 'string' },
    url: { type: 'string' },
    to: { type: 'string' },
    pictures: { type: 'boolean' },
    hard: { type: 'boolean' },
  },
});
const pictures = asked.to ?? fileURLToPath(new URL('../../test-output/audit', import.meta.url));

type StorageState = NonNullable<BrowserContextOptions['storageState']>;

const only = asked.only?.split(',');
const chosen = auditedPages.filter(({ name }) => only?.some((part) => name.includes(part)) ?? true);
const print = (text: string) => process.stdout.write(`${text}\n`);
const findings: string[] = [];

/** An idle session locks itself after a quarter of an hour: a person signs in anew before that. */
const sessionAge = 8 * 60_000;
const sessions = new Map<string, { state: StorageState; since: number }>();
async function sessionOf(browser: Browser, url: string, username: string | null): Promise<StorageState | undefined> {
  if (username === null) return undefined;
  const known = sessions.get(username);
  if (known && Date.now() - known.since < sessionAge) return known.state;
  const { page } = await openPage(browser);
  await signIn(page, url, username);
  const state = await page.context().storageState();
  await page.context().close();
  sessions.set(username, { state, since: Date.now() });
  return state;
}

async function settle(page: Page, ready: string): Promise<void> {
  await page.locator(ready).first().waitFor();
  await page.waitForLoadState('networkidle');
  await page.evaluate('document.fonts.ready.then(() => true)');
}

const followed = new Map<string, string>();
async function addressOf(browser: Browser, url: string, audited: AuditedPage, state: StorageState | undefined) {
  const { follow } = audited;
  if (!follow) return url + audited.path;
  const known = followed.get(audited.name);
  if (known !== undefined) return known;
  const { page } = await openPage(browser, state ? { storageState: state } : {});
  await page.goto(url + audited.path);
  await page.locator('main table a').first().waitFor();
  let href: string | null = null;
  for (const link of await page.locator('main table a').all()) {
    const candidate = await link.getAttribute('href');
    if (href === null && candidate !== null && follow.test(candidate)) href = candidate;
  }
  await page.context().close();
  if (!href) throw new Error(`${audited.path} has no link like ${String(follow)}`);
  followed.set(audited.name, url + href);
  return url + href;
}

async function look(browser: Browser, url: string, audited: AuditedPage): Promise<void> {
  const state = await sessionOf(browser, url, audited.username);
  const address = await addressOf(browser, url, audited, state);
  const before = findings.length;
  const row: string[] = [];
  let scripts = 0;
  let worstShift = 0;
  let broken = 0;
  const report = (where: string, found: readonly string[]) => {
    broken += found.length;
    for (const finding of found) findings.push(`${audited.name}, ${where}: ${finding}`);
  };
  for (const width of asked.hard ? [] : widths) {
    for (const theme of themes) {
      const { page, noise } = await openPage(browser, {
        viewport: { width, height: width === 390 ? 844 : width === 820 ? 1180 : 1000 },
        colorScheme: theme,
        reducedMotion: 'reduce',
        ...(state ? { storageState: state } : {}),
      });
      const where = `${String(width)} ${theme}`;
      await page.addInitScript(shiftCounter);
      const measureScripts = scriptMeter(page);
      await page.goto(address);
      await settle(page, audited.ready);
      const shift = await layoutShift(page);
      worstShift = Math.max(worstShift, shift);
      if (shift >= mostShift) report(where, [`layout shift ${shift.toFixed(3)}, limit ${String(mostShift)}`]);
      scripts = Math.max(scripts, await measureScripts());
      await audited.prepare?.(page);
      if (!asked.pictures) report(where, await axeFindings(page));
      report(where, await sidewaysOverflow(page));
      await page.screenshot({ path: `${pictures}/${audited.name}-${String(width)}-${theme}.png`, fullPage: true });
      report(where, noise);
      await page.context().close();
    }
  }
  // 320 px is a window of 1,280 at 400 %; 640 is one at 200 %.
  const narrow = [
    ['320 px', 320, 720],
    ['200 % zoom', 640, 400],
  ] as const;
  for (const [name, width, height] of asked.hard ? [] : narrow) {
    const { page } = await openPage(browser, {
      viewport: { width, height },
      deviceScaleFactor: name === '320 px' ? 1 : 2,
      reducedMotion: 'reduce',
      ...(state ? { storageState: state } : {}),
    });
    await page.goto(address);
    await settle(page, audited.ready);
    await audited.prepare?.(page);
    report(name, await sidewaysOverflow(page));
    await page.screenshot({ path: `${pictures}/${audited.name}-${String(width)}.png`, fullPage: true });
    await page.context().close();
  }
  if (!asked.pictures)
    report('hard times', await hardTimes(browser, address, audited, state ? { storageState: state } : {}));
  if (scripts > mostScript) report('first load', [`scripts ${String(scripts)} bytes, limit ${String(mostScript)}`]);
  row.push(
    audited.name.padEnd(22),
    (audited.username ?? '–').padEnd(12),
    `${(scripts / 1000).toFixed(1)} kB`.padStart(9),
    worstShift.toFixed(4).padStart(9),
    String(broken).padStart(9),
  );
  print(row.join('  '));
  for (const finding of findings.slice(before)) print(`    ${finding}`);
}

mkdirSync(pictures, { recursive: true });
const running = asked.url === undefined ? await startBuiltDemo() : null;
const url = running?.url ?? asked.url ?? '';
const browser = await openBrowser();
try {
  print(
    ['page'.padEnd(22), 'as'.padEnd(12), 'scripts'.padStart(9), 'shift'.padStart(9), 'findings'.padStart(9)].join('  '),
  );
  for (const audited of chosen) {
    await look(browser, url, audited).catch((error: unknown) => {
      const why = error instanceof Error ? error.message : String(error);
      findings.push(`${audited.name}: could not be looked at: ${why}`);
      print(`    ${findings.at(-1) ?? ''}`);
    });
  }
} finally {
  await browser.close();
  await running?.stop();
}
print(findings.length === 0 ? 'Nothing found.' : `${String(findings.length)} findings.`);
process.exitCode = findings.length === 0 ? 0 : 1;
