import { spawn, type ChildProcess } from 'node:child_process';
import { createServer } from 'node:net';
import { fileURLToPath } from 'node:url';
import { chromium, type Browser, type BrowserContextOptions, type Page } from 'playwright-core';
import { makeTempFolder, removeTempFolder } from './temp-folder.ts';

const root = fileURLToPath(new URL('../..', import.meta.url));

/** The built demo in a process and a data folder of its own. */
export interface RunningDemo {
  url: string;
  dataDir: string;
  pid: number;
  output(): string;
  /** Ends the process as an outage does; what it stored stays. */
  pause(): Promise<void>;
  /** Starts it again at the same address on what it stored. */
  resume(): Promise<void>;
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
  const dataDir = makeTempFolder('journey');
  const port = await freePorts();
  let output = '';
  const start = async (): Promise<ChildProcess> => {
    const begun = output.length;
    const child: ChildProcess = spawn(process.execPath, ['dist/demo/main.js'], {
      cwd: root,
      // The test runner has a BASE_URL of its own in its environment; an empty one is as if unset.
      env: { ...process.env, BASE_URL: '', LOG_LEVEL: 'warn', PORT: String(port), DATA_DIR: dataDir, ...env },
      stdio: ['ignore', 'pipe', 'pipe'],
    });
    await new Promise<void>((resolve, reject) => {
      const read = (chunk: Buffer) => {
        output += chunk.toString();
        if (output.includes('Stop with Ctrl+C', begun)) resolve();
      };
      child.stdout?.on('data', read);
      child.stderr?.on('data', read);
      child.once('exit', (code) => {
        reject(new Error(`the demo ended with code ${String(code)}:\n${output}`));
      });
    });
    child.removeAllListeners('exit');
    return child;
  };
  const end = async (running: ChildProcess) => {
    const ended = new Promise((resolve) => running.once('exit', resolve));
    running.kill('SIGTERM');
    await ended;
  };
  let child: ChildProcess | null = null;
  // A runner that ends before its demo was stopped leaves no process behind.
  const kill = () => child?.kill('SIGKILL');
  process.once('exit', kill);
  child = await start();
  return {
    url: `http://127.0.0.1:${String(port)}`,
    dataDir,
    get pid() {
      return child?.pid ?? 0;
    },
    output: () => output,
    async pause() {
      if (child) await end(child);
      child = null;
    },
    async resume() {
      child = await start();
    },
    async stop() {
      if (child) await end(child);
      child = null;
      process.removeListener('exit', kill);
      removeTempFolder(dataDir);
    },
  };
}

/** The system's Chromium, headless. */
export function openBrowser(more: readonly string[] = []): Promise<Browser> {
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
      ...more,
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
