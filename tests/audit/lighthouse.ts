import { createServer, type AddressInfo } from 'node:net';
import { parseArgs } from 'node:util';
import lighthouse, { desktopConfig, type Flags, type Result } from 'lighthouse';
import { cancelRecomputing, signIn as signInToServed } from '../bench/demo-server.ts';
import { openBrowser, openPage, signIn, startBuiltDemo } from '../support/journey.ts';
import { firstViewOfTonight, longestFirstView } from './first-view.ts';

/**
 * `npm run audit:lighthouse`, after a build and with nothing else running: Tonight and Week ahead with demo data, on the
 * desktop and on the throttled mobile profile, and how long the first view of Tonight takes on the throttled tablet
 * (`first-view.ts`). `-- --url ADDRESS` looks at a demo that is running already. Below what is
 * asked for it says what cost the points and ends with 1.
 */
const { values: asked } = parseArgs({ options: { url: { type: 'string' }, only: { type: 'string' } } });
const pages = [
  { name: 'tonight', username: 'charge', path: '/sites/farrowmere-general/tonight', ready: '.night-board' },
  { name: 'week-ahead', username: 'operations', path: '/sites/farrowmere-general/week', ready: '.week-board' },
].filter(({ name }) => asked.only === undefined || name.includes(asked.only));
const profiles = ['desktop', 'mobile'] as const;
const least = {
  accessibility: { desktop: 1, mobile: 1 },
  'best-practices': { desktop: 1, mobile: 1 },
  performance: { desktop: 0.95, mobile: 0.9 },
} as const;
const categories = ['performance', 'accessibility', 'best-practices'] as const;
const print = (text: string) => process.stdout.write(`${text}\n`);

function freePort(): Promise<number> {
  return new Promise((resolve) => {
    const probe = createServer();
    probe.listen(0, '127.0.0.1', () => {
      const { port } = probe.address() as AddressInfo;
      probe.close(() => resolve(port));
    });
  });
}

/** What cost points, the dearest first, and what of it can be pointed at. */
function costs(result: Result): string[] {
  const weights = new Map(
    categories.flatMap((category) =>
      (result.categories[category]?.auditRefs ?? []).map((ref) => [ref.id, ref.weight] as const),
    ),
  );
  return Object.values(result.audits)
    .filter(({ id, score }) => score !== null && score < 0.9 && ((weights.get(id) ?? 0) > 0 || id.includes('insight')))
    .sort((a, b) => (weights.get(b.id) ?? 0) - (weights.get(a.id) ?? 0))
    .map(({ id, displayValue, details }) => {
      const items = details && 'items' in details && Array.isArray(details.items) ? details.items.slice(0, 4) : [];
      const words = items.map((item) => JSON.stringify(item, ['node', 'snippet', 'issueType', 'url', 'source']));
      return [id, displayValue, ...words.map((word) => word.slice(0, 240))].filter(Boolean).join(' ');
    });
}

const running = asked.url === undefined ? await startBuiltDemo() : null;
// The demo's own work on its year of track record would be measured with the page.
if (running) await cancelRecomputing(await signInToServed(running, 'steward'));
const url = running?.url ?? asked.url ?? '';
const port = await freePort();
const browser = await openBrowser([`--remote-debugging-port=${String(port)}`]);
let short = 0;
try {
  print(['page'.padEnd(12), 'profile'.padEnd(8), ...categories.map((name) => name.padStart(15))].join('  '));
  for (const { name, username, path, ready } of pages) {
    const { page } = await openPage(browser);
    await signIn(page, url, username, path);
    await page.locator(ready).first().waitFor();
    const cookies = await page.context().cookies();
    const Cookie = cookies.map((cookie) => `${cookie.name}=${cookie.value}`).join('; ');
    for (const profile of profiles) {
      const flags: Flags = {
        port,
        logLevel: 'error',
        onlyCategories: [...categories],
        extraHeaders: { Cookie },
        disableStorageReset: true,
      };
      const run = await lighthouse(url + path, flags, profile === 'desktop' ? desktopConfig : undefined);
      if (!run) throw new Error('Lighthouse gave no result.');
      const { lhr } = run;
      const scores = categories.map((category) => lhr.categories[category]?.score ?? 0);
      const below = categories.some((category, index) => scores[index] < least[category][profile]);
      if (below) short += 1;
      print(
        [
          name.padEnd(12),
          profile.padEnd(8),
          ...scores.map((score) => String(Math.round(score * 100)).padStart(15)),
          `${lhr.audits['largest-contentful-paint'].displayValue ?? ''} largest paint,`,
          `${lhr.audits['total-blocking-time'].displayValue ?? ''} blocked,`,
          `shift ${lhr.audits['cumulative-layout-shift'].displayValue ?? ''}`,
        ].join('  '),
      );
      if (!lhr.finalDisplayedUrl.includes(path)) print(`    landed on ${lhr.finalDisplayedUrl}`);
      if (below) for (const cost of costs(lhr)) print(`    ${cost}`);
    }
    if (name === 'tonight') {
      const took = await firstViewOfTonight(browser, url + path, await page.context().storageState());
      const late = took >= longestFirstView;
      if (late) short += 1;
      print(
        `${name.padEnd(12)}  first view on the throttled tablet, cold cache: ${String(Math.round(took))} ms ` +
          `(under ${String(longestFirstView)} asked for)${late ? ': too late' : ''}`,
      );
    }
    await page.context().close();
  }
} finally {
  await browser.close();
  await running?.stop();
}
process.exitCode = short === 0 ? 0 : 1;
