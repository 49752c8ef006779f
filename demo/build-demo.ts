import type { RunningServer } from '../server/start.ts';
import { makeZone } from '../shared/domain/zoned-time.ts';
import { signInToDemo } from './demo-caller.ts';
import { demoPassword } from './farrowmere-accounts.ts';
import { demoSites } from './farrowmere.ts';
import { enterDemoCensus, finishJob, loadVisits, topUpVisits } from './live-history.ts';
import { scheduleBriefs } from './schedule-briefs.ts';
import { isSeeded, seedInstallation } from './seed-installation.ts';

const historyMonths = 18;

/** Tells what is being done. */
export type Say = (text: string) => void;

/**
 * Brings a running server's installation to the state of the demo as of its clock: on an empty database
 * everything is loaded through the product's own sign-in, upload, fit, approval and census; later starts
 * add the visits since and a fresh census.
 */
export async function buildDemo(server: RunningServer, say: Say): Promise<void> {
  const { database, clock, config } = server.deps;
  const now = clock();
  const host = ['0.0.0.0', '::'].includes(config.host) ? '127.0.0.1' : config.host;
  const addresses = {
    baseUrl: config.baseUrl,
    localUrl: `http://${host.includes(':') ? `[${host}]` : host}:${String(config.port)}`,
  };
  const signIn = (username: string) => signInToDemo(addresses, username, demoPassword);
  if (await isSeeded(database)) {
    const topped = await topUpVisits(database, await signIn('steward'), now);
    if (topped > 0) {
      say('Visits since the last start were added.');
      await enterDemoCensus(await signIn('charge'), now, 22);
    }
    return;
  }
  const from = historyStart(now);
  await seedInstallation(database, from, now);
  const steward = await signIn('steward');
  const operations = await signIn('operations');
  const approver = await signIn('operations2');
  const fits: { siteId: string; modelId: string; jobId: string }[] = [];
  for (const site of demoSites) {
    say(`${site.name}: loading ${String(historyMonths)} months of visits`);
    await loadVisits(steward, site, from, now, `${site.id} first load.csv`);
    await operations.send('PUT', `/api/sites/${site.id}/staffed-beds`, {
      areas: site.plan,
      reason: 'Plan in force at the start',
    });
    const asked = (await steward.send('POST', `/api/sites/${site.id}/arrival-models`, {})) as {
      modelId: string;
      jobId: string;
    };
    fits.push({ siteId: site.id, ...asked });
  }
  for (const { siteId, modelId, jobId } of fits) {
    await finishJob(steward, siteId, jobId);
    await approver.send('POST', `/api/sites/${siteId}/arrival-models/${modelId}/approval`, {
      reason: 'First model; rates and stays agree with what the shifts know',
    });
  }
  say('Models fitted and approved');
  await enterDemoCensus(await signIn('charge'), now, 22);
  say('Census entered');
  await scheduleBriefs(database, operations);
  // A job that anybody sees running under Track record; it stands back behind everything else and goes on after a restart.
  for (const site of demoSites) {
    await steward.send('POST', `/api/sites/${site.id}/track-record/recomputation`, { weeks: 52 });
  }
  say('The track record of the last year is being recomputed in the background');
}

/** Midnight, local time, of the day 18 months before. */
function historyStart(now: number): number {
  const zone = makeZone(demoSites[0].timeZone);
  const date = new Date(zone.toLocal(now) * 1000);
  const local = Date.UTC(date.getUTCFullYear(), date.getUTCMonth() - historyMonths, date.getUTCDate()) / 1000;
  return zone.fromLocal(local)[0];
}
