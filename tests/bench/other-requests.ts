import { Worker } from 'node:worker_threads';

// Its own thread: a bench that makes and sends a file of 60 MB stalls its own event loop, and would
// count that as the server's. Plain JavaScript, since a thread cannot load TypeScript here.
const asking = `
  const { parentPort, workerData } = require('node:worker_threads');
  const { request } = require('node:http');
  const times = [];
  let going = true;
  parentPort.once('message', () => { going = false; });
  function ask(path) {
    return new Promise((resolve, reject) => {
      request(workerData.url + path, { headers: { cookie: workerData.cookie } }, (res) => {
        if (res.statusCode !== 200) reject(new Error(path + ' answered ' + res.statusCode));
        res.resume().on('end', resolve);
      }).on('error', reject).end();
    });
  }
  (async () => {
    for (let turn = 0; going; turn += 1) {
      const startedAt = performance.now();
      await ask(workerData.paths[turn % workerData.paths.length]);
      times.push(performance.now() - startedAt);
      await new Promise((resolve) => setTimeout(resolve, 40));
    }
    parentPort.postMessage(times);
  })();
`;

/**
 * Asks for some paths in turn, 25 times a second at most, until told to stop.
 * @returns what stops it and answers with the milliseconds of each request
 */
export function askMeanwhile(url: string, cookie: string, paths: readonly string[]): () => Promise<number[]> {
  const worker = new Worker(asking, { eval: true, workerData: { url, cookie, paths } });
  const times = new Promise<number[]>((resolve, reject) => {
    worker.once('message', resolve);
    worker.once('error', reject);
  });
  return () => {
    worker.postMessage('stop');
    return times;
  };
}
