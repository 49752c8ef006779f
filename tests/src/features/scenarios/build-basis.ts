import type { WhatIfBasis } from '../../../../shared/api/scenarios.ts';
import { makeExactWire } from '../../../../shared/forecasting/exact-wire.ts';
import { buildOutlookInput, buildOutlookModel } from '../../../support/build-outlook-model.ts';

/** Two areas and 24 hours of a fitted model, as the page gets them; the second area is not counted. */
export function buildBasis(): WhatIfBasis {
  const plain = buildOutlookInput();
  const input = { ...plain, areas: plain.areas.map((area, a) => (a === 0 ? area : { ...area, census: null })) };
  const names = ['Acute', 'Resuscitation'];
  return {
    digest: 'basis',
    issuedAt: input.issuedAt,
    modelId: 'model',
    planVersion: 3,
    areas: input.areas.map(({ census, ...area }, a) => ({
      ...area,
      name: names[a],
      spaceKind: 'bed',
      noticeHours: 2,
      countedAt: census?.takenAt ?? null,
      boarding: census?.boarding ?? null,
    })),
    planningRisk: 0.1,
    shifts: input.shifts,
    // As it arrives: JSON, whose arrays nobody marked read-only.
    exact: JSON.parse(JSON.stringify(makeExactWire(buildOutlookModel(), input))) as WhatIfBasis['exact'],
  };
}

export const zoneName = 'America/Toronto';
