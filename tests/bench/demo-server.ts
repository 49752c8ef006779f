import { readFileSync } from 'node:fs';
import { setTimeout as pause } from 'node:timers/promises';
import { signInToDemo, type DemoCaller } from '../../demo/demo-caller.ts';
import { demoSites } from '../../demo/farrowmere.ts';
import { startBuiltDemo, type RunningDemo } from '../support/journey.ts';

/** The site that the bench works at, and its part of the API. */
export const servedSite = demoSites[0];
export const sitePath = `/api/sites/${servedSite.id}`;

let demo: Promise<RunningDemo> | null = null;
let startedIn = NaN;

async function start(): Promise<RunningDemo> {
  const startedAt = performance.now();
  const running = await startBuiltDemo();
  startedIn = (performance.now() - startedAt) / 1000;
  await cancelRecomputing(await signIn(running, 'steward'));
  return running;
}

/** The demo recomputes a year of its track record in the background; what is measured here is a server without it. */
export async function cancelRecomputing(steward: Pick<DemoCaller, 'get' | 'send'>): Promise<void> {
  for (const { id } of demoSites) {
    const { jobs } = (await steward.get(`/api/sites/${id}/jobs`)) as {
      jobs: { id: string; kind: string; status: string }[];
    };
    for (const job of jobs) {
      if (!job.kind.startsWith('track-record.') || !['queued', 'running'].includes(job.status)) continue;
      await steward.send('POST', `/api/sites/${id}/jobs/${job.id}/cancel`, {});
    }
  }
}

/** Waits until nothing is queued or running at any site: a start catches up with what is due. */
export async function untilIdle(steward: Pick<DemoCaller, 'get'>): Promise<void> {
  for (;;) {
    let busy = 0;
    for (const { id } of demoSites) {
      const { jobs } = (await steward.get(`/api/sites/${id}/jobs`)) as { jobs: { status: string }[] };
      busy += jobs.filter(({ status }) => status === 'queued' || status === 'running').length;
    }
    if (busy === 0) return;
    await pause(1000);
  }
}

/** The built demo, started once for all that is measured on it. */
export function servedDemo(): Promise<RunningDemo> {
  demo ??= start();
  return demo;
}

/** Seconds that its first start from an empty folder took. */
export function demoStartSeconds(): number {
  return startedIn;
}

/** Stops what was started. */
export async function stopServed(): Promise<void> {
  await (await demo)?.stop();
  demo = null;
}

export function signIn(running: RunningDemo, username: string): Promise<DemoCaller> {
  return signInToDemo({ baseUrl: running.url, localUrl: running.url }, username, 'demo');
}

/** Resident memory of a process in MB, as the system counts it: now, or at most since it started or was asked to count anew. */
export function memoryOf(pid: number, which: 'now' | 'peak'): number {
  const status = readFileSync(`/proc/${String(pid)}/status`, 'utf8');
  const line = which === 'now' ? /VmRSS:\s+(\d+)/ : /VmHWM:\s+(\d+)/;
  return Number(line.exec(status)?.[1] ?? NaN) / 1024;
}
