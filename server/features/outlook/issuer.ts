import { createHash } from 'node:crypto';
import type { z } from 'zod';
import type { outlookTrigger } from '../../../shared/api/outlooks.ts';
import { engineVersion } from '../../../shared/forecasting/engine-version.ts';
import { newId } from '../../database/new-id.ts';
import { readModelInUse, readModelParameters } from '../../database/read-model.ts';
import type { Dependencies } from '../../dependencies.ts';
import { OutlookRow } from '../../entities/OutlookRow.ts';
import { OutlookLawsRow } from '../../entities/OutlookLawsRow.ts';
import { Site } from '../../entities/Site.ts';
import { softwareVersion } from '../../software-version.ts';
import { buildOutlookInput } from './build-input.ts';
import { computeOutlookWithLaws } from './compute-outlook.ts';

export type OutlookTrigger = z.infer<typeof outlookTrigger>;

/** What came of a wish for an outlook. */
export type Issued =
  | { outlookId: string; reason: null }
  | { outlookId: null; reason: 'no model' | 'no staffed-bed plan' | 'the outlook could not be computed' };

interface SiteQueue {
  running: Promise<Issued>;
  /** At most one further run waits: it will see everything that is stored by the time it starts. */
  next: Promise<Issued> | null;
}

/**
 * Issues outlooks. Wishes of one site that come in while it computes are answered together by one
 * further run, which sees everything stored before it starts.
 */
export class OutlookIssuer {
  private readonly deps: Dependencies;
  /** Of every outlook; comparisons of plans take as many. */
  readonly replications: number;
  private readonly queues = new Map<string, SiteQueue>();
  /** What follows from an outlook (an alert mail); it never holds up or fails the outlook itself. */
  onIssued: ((outlookId: string) => Promise<unknown>) | null = null;
  private readonly following = new Set<Promise<unknown>>();

  constructor(deps: Dependencies, replications = 10_000) {
    this.deps = deps;
    this.replications = replications;
  }

  /** True while an outlook of the site is being computed. */
  computing(siteId: string): boolean {
    return this.queues.has(siteId);
  }

  /** True while an outlook of any site is being computed. */
  computingAny(): boolean {
    return this.queues.size > 0;
  }

  /** Computes and stores a new outlook from what is stored now. */
  issue(siteId: string, trigger: OutlookTrigger): Promise<Issued> {
    const queue = this.queues.get(siteId);
    if (queue) {
      queue.next ??= queue.running.catch(() => undefined).then(() => this.run(siteId, trigger));
      return queue.next;
    }
    return this.run(siteId, trigger);
  }

  /** The same where a failure to compute is reported but must not become the caller's: what was saved stays saved. */
  async issueOrReport(siteId: string, trigger: OutlookTrigger): Promise<Issued> {
    try {
      return await this.issue(siteId, trigger);
    } catch (error) {
      this.deps.logger.error({ err: error, siteId, trigger }, 'an outlook could not be computed');
      return { outlookId: null, reason: 'the outlook could not be computed' };
    }
  }

  /** Waits for everything under way. */
  async settle(): Promise<void> {
    while (this.queues.size > 0) {
      await Promise.allSettled([...this.queues.values()].map((queue) => queue.next ?? queue.running));
    }
    await Promise.all(this.following);
  }

  private run(siteId: string, trigger: OutlookTrigger): Promise<Issued> {
    const running = this.issueNow(siteId, trigger);
    const queue: SiteQueue = { running, next: null };
    this.queues.set(siteId, queue);
    running
      .catch(() => undefined)
      .finally(() => {
        if (this.queues.get(siteId) === queue && queue.next === null) this.queues.delete(siteId);
      });
    return running;
  }

  private async issueNow(siteId: string, trigger: OutlookTrigger): Promise<Issued> {
    const { database, clock, simulation } = this.deps;
    const site = await database.read.findOneByOrFail(Site, { id: siteId });
    const model = await readModelInUse(database.read, siteId);
    if (!model) return { outlookId: null, reason: 'no model' };
    const parameters = await readModelParameters(database.read, model.id);
    const input = await buildOutlookInput(database.read, site, parameters.areaIds, clock(), this.replications);
    if (!input) return { outlookId: null, reason: 'no staffed-bed plan' };
    const startedAt = performance.now();
    const computed = await computeOutlookWithLaws(simulation, parameters, input);
    const result = JSON.stringify(computed.result);
    const computeMilliseconds = performance.now() - startedAt;
    const outlookId = newId();
    await database.write(async (manager) => {
      await manager.insert(OutlookRow, {
        id: outlookId,
        siteId,
        issuedAt: input.issuedAt,
        trigger,
        modelId: model.id,
        seed: input.seed,
        replications: input.replications,
        engineVersion,
        softwareVersion,
        computeMilliseconds,
        input: JSON.stringify(input),
        result,
        digest: digestOf(result),
      });
      const laws = JSON.stringify(computed.laws);
      await manager.insert(OutlookLawsRow, { outlookId, siteId, issuedAt: input.issuedAt, laws });
    });
    this.follow(siteId, outlookId);
    return { outlookId, reason: null };
  }

  private follow(siteId: string, outlookId: string): void {
    if (!this.onIssued) return;
    const following = this.onIssued(outlookId)
      .catch((error: unknown) => {
        this.deps.logger.error({ err: error, siteId }, 'what follows from an outlook failed');
      })
      .finally(() => this.following.delete(following));
    this.following.add(following);
  }
}

/** SHA-256 of a result's text; equal digests mean equal digits. */
export function digestOf(result: string): string {
  return createHash('sha256').update(result).digest('hex');
}
