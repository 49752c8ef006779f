import type { MessagePort } from 'node:worker_threads';
import { weekLaws } from '../../../shared/forecasting/week-laws.ts';
import { prepareWeek, simulateWeekPart, weekFromParts } from '../../../shared/forecasting/week-outlook.ts';
import type { WeekPart } from '../../../shared/forecasting/record-week.ts';
import type { WeekOutlookInput } from '../../../shared/forecasting/week-outlook-types.ts';
import type { ModelParameters } from '../../database/read-model.ts';
import { readSiteVisits } from '../../database/read-visits.ts';
import type { WeekInput } from './build-week-input.ts';
import { ambulanceHistorySeconds, countAmbulances } from './count-ambulances.ts';

/** What the computing thread is given; it counts the ambulances itself, through its own read-only connection. */
export interface WeekRequest {
  databaseFile: string;
  siteId: string;
  parameters: ModelParameters;
  input: WeekInput;
  /** Shares done, 0..1, and a few words. */
  progress: MessagePort;
}

/** The whole input, the result and the distributions behind it, as JSON: the main thread only stores them. */
export interface WeekReply {
  input: string;
  result: string;
  laws: string;
}

const steps = 8;

export default function computeWeek(request: WeekRequest): WeekReply {
  const { databaseFile, siteId, parameters, progress } = request;
  const tell = (share: number, text: string): void => {
    progress.postMessage({ share, text });
  };
  try {
    tell(0.02, 'Counting ambulances');
    const visits = readSiteVisits(databaseFile, siteId, request.input.issuedAt - ambulanceHistorySeconds);
    const input: WeekOutlookInput = {
      ...request.input,
      ambulance: countAmbulances(visits, parameters.areaIds, request.input.timeZone, request.input.issuedAt),
    };
    const prepared = prepareWeek(parameters, input);
    const parts: WeekPart[] = [];
    const bound = (step: number): number => Math.floor((step * input.replications) / steps);
    for (let step = 0; step < steps; step += 1) {
      tell(0.1 + (0.7 * step) / steps, 'Simulating the days ahead');
      if (bound(step + 1) > bound(step)) parts.push(simulateWeekPart(prepared, bound(step), bound(step + 1)));
    }
    tell(0.8, 'Forecasting arrivals');
    const result = weekFromParts(prepared, parts);
    return {
      input: JSON.stringify(input),
      result: JSON.stringify(result),
      laws: JSON.stringify(weekLaws(prepared, parts, result)),
    };
  } finally {
    progress.close();
  }
}
