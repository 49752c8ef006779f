import { Agent, request } from 'node:http';
import { performance } from 'node:perf_hooks';
import { setTimeout as pause } from 'node:timers/promises';
import { parentPort, workerData } from 'node:worker_threads';

// People who look at Tonight, in a thread of their own, so that the rest of the test does not count as the server's time.
// Plain JavaScript, since a thread cannot load TypeScript here.
const { url, cookies, sitePath, everySeconds, seconds } = workerData;
const agent = new Agent({ keepAlive: true, maxSockets: cookies.length });
const times = {};
const errors = [];
const endAt = performance.now() + seconds * 1000;

/** Asks once; the time runs until the whole answer is here. */
function ask(name, path, cookie) {
  const startedAt = performance.now();
  return new Promise((resolve) => {
    const failed = (what) => {
      errors.push(`${path}: ${what}`);
      resolve('');
    };
    const sent = request(url + path, { agent, headers: { cookie, 'accept-encoding': 'gzip' } }, (res) => {
      res.resume();
      res.on('end', () => {
        if (res.statusCode === 200) (times[name] ??= []).push(performance.now() - startedAt);
        else errors.push(`${path}: answered ${res.statusCode}`);
        resolve();
      });
    });
    sent.on('error', (error) => failed(error.message));
    sent.end();
  });
}

async function look(cookie, index) {
  // They opened the page at one time or another.
  await pause((index / cookies.length) * everySeconds * 1000);
  await ask('site', sitePath, cookie);
  for (let turn = 0; performance.now() < endAt; turn += 1) {
    const startedAt = performance.now();
    await Promise.all([
      ask('Tonight', `${sitePath}/tonight`, cookie),
      ask('census', `${sitePath}/census`, cookie),
      ...(turn % 2 === 0 ? [ask('night log', `${sitePath}/night-log`, cookie)] : []),
    ]);
    await pause(Math.min(startedAt + everySeconds * 1000, endAt) - performance.now());
  }
}

await Promise.all(cookies.map(look));
agent.destroy();
parentPort.postMessage({ times, errors });
