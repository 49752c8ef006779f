import { spawn, type ChildProcess } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { chromium, type Browser, type BrowserContextOptions, type Page } from 'playwright-core';

const root = fileURLToPath(new URL('../..', import.meta.url));

/** The built demo in a process and a data folder of its own. */
export interface RunningDemo {
  url: string;
  dataDir: string;
  pid: number;
  output(): string;
  stop(): Promise<void>;
}

/** Four free ports in a row on loopback. */
async function freePorts(): Promise<number> {
  const isFree = (port: number) =>
    new Promise<boolean>((resolve) => {
      const probe = createServer();
      probe.once('error', () => {
        resolve(false);
      });
      probe.listen(port, '127.0.0.1', () => {
        probe.close(() => {
          resolve(true);
        });
      });
    });
  for (let base = 14_310 + (process.pid % 500) * 8; base < 60_000; base += 8) {
    const free = await Promise.all([0, 1, 2, 3].map((offset) => isFree(base + offset)));
    if (free.every(Boolean)) return base;
  }
  throw new Error('no four free ports in a row');
}

/** Starts `npm run demo`'s second half (the build is there) and waits for its address. */
export async function startBuiltDemo(env: Record<string, string> = {}): Promise<RunningDemo> {
  const dataDir = mkdtempSync(join(tmpdir(), 'shoalmark-journey-'));
  const port = await freePorts();
  const child: ChildProcess = spawn(process.execPath, ['dist/demo/main.js'], {
    cwd: root,
    // The test runner has a BASE_URL of its own in its environment; an empty one is as if unset.
    env: { ...process.env, BASE_URL: '', LOG_LEVEL: 'warn', PORT: String(port), DATA_DIR: dataDir, ...env },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let output = '';
  const ready = new Promise<void>((resolve, reject) => {
    const read = (chunk: Buffer) => {
      output += chunk.toString();
      if (output.includes('Stop with Ctrl+C')) resolve();
    };
    child.stdout?.on('data', read);
    child.stderr?.on('data', read);
    child.once('exit', (code) => {
      reject(new Error(`the demo ended with code ${String(code)}:\n${output}`));
    });
  });
  await ready;
  return {
    url: `http://127.0.0.1:${String(port)}`,
    dataDir,
    pid: child.pid ?? 0,
    output: () => output,
    async stop() {
      child.removeAllListeners('exit');
      const ended = new Promise((resolve) => child.once('exit', resolve));
      child.kill('SIGTERM');
      await ended;
      rmSync(dataDir, { recursive: true, force: true });
    },
  };
}

/** The system's Chromium, headless. */
export function openBrowser(): Promise<Browser> {
  return chromium.launch({
    executablePath: process.env.CHROMIUM_PATH ?? '/usr/bin/chromium',
    args: [
      '--no-sandbox',
      '--disable-gpu',
      '--disable-quic',
      '--no-first-run',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
    ],
  });
}

/** A page of its own browser context that fails the journey on console noise. */
export async function openPage(
  browser: Browser,
  options: BrowserContextOptions = {},
): Promise<{ page: Page; noise: string[] }> {
  const context = await browser.newContext({ viewport: { width: 1440, height: 1000 }, ...options });
  const page = await context.newPage();
  const noise: string[] = [];
  page.on('console', (message) => {
    if (['error', 'warning'].includes(message.type())) noise.push(message.text());
  });
  page.on('pageerror', (error) => noise.push(error.message));
  return { page, noise };
}

/** Signs in through the stand-in provider's form, as a person does. */
export async function signIn(page: Page, url: string, username: string, path = '/'): Promise<void> {
  await page.goto(`${url}/auth/sign-in?returnTo=${encodeURIComponent(path)}`);
  await page.locator('input[name=username]').fill(username);
  await page.locator('input[name=password]').fill('demo');
  await page.locator('input[name=password]').press('Enter');
  await page.waitForURL((address) => address.href.startsWith(url) && !address.pathname.startsWith('/auth'));
}
