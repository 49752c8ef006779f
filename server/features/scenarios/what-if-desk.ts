import type { WhatIfBasis } from '../../../shared/api/scenarios.ts';
import type { PlanFrame } from '../../../shared/domain/plan-change.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import { readModelInUse, readModelParameters } from '../../database/read-model.ts';
import { fullHoursAfter, readNeedInput } from '../../database/read-need-input.ts';
import { readAreas } from '../../database/read-site.ts';
import { readPlan } from '../../database/read-staffed-beds.ts';
import type { Dependencies } from '../../dependencies.ts';
import type { CareArea } from '../../entities/CareArea.ts';
import type { Site } from '../../entities/Site.ts';
import { digestOf, prepareOnThread } from './compare-plan.ts';

export const hoursLookedAt = 168;

/** What plans are tried against at a site now. */
export interface Basis {
  /** Names these inputs: two readings within the hour without a change between them have the same. */
  digest: string;
  input: OutlookInput;
  modelId: string;
  planVersion: number;
  areas: CareArea[];
}

/** Why there is nothing to try plans against, and what to do. */
export interface NoBasis {
  reason: string;
  next: string;
}

interface Prepared {
  basis: Basis;
  /** The basis as the page gets it, JSON. */
  text: Promise<string>;
}

/** Inputs for the What if page, prepared once an hour or whenever what they stand on changes. */
export class WhatIfDesk {
  private readonly deps: Dependencies;
  private readonly replications: number;
  private readonly prepared = new Map<string, Prepared>();

  /** @param replications pairs that a confirmation runs */
  constructor(deps: Dependencies, replications: number) {
    this.deps = deps;
    this.replications = replications;
  }

  /** The basis of now, and its text for the page. */
  async open(site: Site, now: number): Promise<Prepared | NoBasis> {
    const basis = await this.read(site, now);
    if (!('digest' in basis)) return basis;
    const known = this.prepared.get(site.id);
    if (known?.basis.digest === basis.digest) return known;
    const fresh: Prepared = { basis, text: this.prepare(basis) };
    this.prepared.set(site.id, fresh);
    fresh.text.catch(() => {
      // The next call tries again; this one's caller is told.
      if (this.prepared.get(site.id) === fresh) this.prepared.delete(site.id);
    });
    return fresh;
  }

  private async read(site: Site, now: number): Promise<Basis | NoBasis> {
    const { read } = this.deps.database;
    const model = await readModelInUse(read, site.id);
    if (!model) {
      return {
        reason: 'No arrival model is in use.',
        next: 'A data steward loads a visit log and fits a model; an operations manager approves it.',
      };
    }
    const { areaIds } = await readModelParameters(read, model.id);
    const hours = fullHoursAfter(makeZone(site.timeZone), now, hoursLookedAt);
    const input = await readNeedInput(read, site, areaIds, now, hours, this.replications);
    const plan = await readPlan(read, site.id);
    if (!input || !plan) {
      return {
        reason: 'No staffed-bed plan names every care area.',
        next: 'An operations manager saves the staffed-bed plan of this site.',
      };
    }
    const all = await readAreas(read, site.id);
    const areas = input.areas.flatMap(({ areaId }) => all.filter(({ id }) => id === areaId));
    const modelId = model.id;
    const planVersion = plan.plan.version;
    const digest = digestOf(
      JSON.stringify({
        modelId,
        planVersion,
        areas: areas.map(({ name, noticeHours }) => [name, noticeHours]),
        // What moves with the clock alone is left out: within the hour the same figures stand.
        input: {
          ...input,
          issuedAt: 0,
          seed: 0,
          areas: input.areas.map((area) => ({
            ...area,
            staffedBeds: area.staffedBeds.map(({ at, beds }, i) => ({ at: i === 0 ? 0 : at, beds })),
          })),
        },
      }),
    );
    // The seed follows from the inputs, so that plans saved on the same basis share their as is to the digit.
    return { digest, input: { ...input, seed: parseInt(digest.slice(0, 7), 16) }, modelId, planVersion, areas };
  }

  private async prepare(basis: Basis): Promise<string> {
    const { database, simulation } = this.deps;
    const { digest, input, modelId, planVersion, areas } = basis;
    const parameters = await readModelParameters(database.read, modelId);
    const exact = await prepareOnThread(simulation, parameters, input);
    const facts: Omit<WhatIfBasis, 'exact'> = {
      digest,
      issuedAt: input.issuedAt,
      modelId,
      planVersion,
      areas: input.areas.map((area, a) => ({
        areaId: area.areaId,
        name: areas[a].name,
        spaceKind: areas[a].spaceKind,
        spaces: area.spaces,
        safeMinimum: area.safeMinimum,
        bedStep: area.bedStep,
        alertLimit: area.alertLimit,
        noticeHours: areas[a].noticeHours,
        countedAt: area.census?.takenAt ?? null,
        boarding: area.census?.boarding ?? null,
        staffedBeds: area.staffedBeds,
      })),
      planningRisk: input.planningRisk,
      shifts: input.shifts,
    };
    return `${JSON.stringify(facts).slice(0, -1)},"exact":${exact}}`;
  }
}

/** What a plan's changes are checked against. */
export function planFrame({ input, areas }: Pick<Basis, 'input' | 'areas'>): PlanFrame {
  return {
    from: input.issuedAt,
    to: input.hours[input.hours.length - 1],
    areas: input.areas.map((area, a) => ({
      areaId: area.areaId,
      name: areas[a].name,
      spaces: area.spaces,
      boarding: area.census?.boarding ?? null,
      staffedBeds: area.staffedBeds,
    })),
  };
}
