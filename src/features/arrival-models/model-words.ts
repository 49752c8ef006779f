import type { ModelDetail, ModelSummary } from '../../../shared/api/arrival-models.ts';
import { formatAge, formatCount, formatDate, formatList, formatNumber } from '../../lib/format.ts';

const statusWords: Record<ModelSummary['status'], string> = {
  fitting: 'Being fitted',
  candidate: 'Candidate',
  'in use': 'In use',
  retired: 'Retired',
  failed: 'Fit failed',
};

export function statusWord(status: ModelSummary['status']): string {
  return statusWords[status];
}

/** What the model was fitted on: "142,381 visits, 78 weeks, 20 May 2025 to 20 Nov 2026". */
export function groundsInWords(model: ModelSummary, timeZone: string): string {
  if (model.trainedFrom === null || model.trainedTo === null) return 'Nothing yet';
  return (
    `${formatNumber(model.visits)} visits, ${formatNumber(model.weeksOfHistory)} weeks, ` +
    `${formatDate(model.trainedFrom, timeZone)} to ${formatDate(model.trainedTo, timeZone)}`
  );
}

/** What has changed about its visits since it was fitted, as sentences; none if nothing has. */
export function sinceFitInWords({ sinceFit }: ModelSummary): string[] {
  const { withdrawnLogs, gapsDeclared } = sinceFit;
  return [
    ...(withdrawnLogs.length > 0
      ? [
          `It was fitted on ${formatCount(withdrawnLogs.length, 'log that was', 'logs that were')} withdrawn since: ${formatList(withdrawnLogs)}.`,
        ]
      : []),
    ...(gapsDeclared > 0
      ? [
          `${formatCount(gapsDeclared, 'outage or diversion was', 'outages or diversions were')} declared since within its time; it took those hours for ordinary ones.`,
        ]
      : []),
  ];
}

/** The headline of a model's page. */
export function modelHeadline(model: ModelSummary, now: number): string {
  if (model.status === 'fitting') return 'This model is being fitted.';
  if (model.status === 'failed') return 'This fit failed.';
  const age = model.fittedAt === null ? '' : `, fitted ${formatAge(now - model.fittedAt)} ago`;
  if (model.status === 'candidate') return `A candidate${age}. It waits for approval.`;
  if (model.status === 'in use') return `The model in use${age}.`;
  return `A retired model${age}.`;
}

const share = (value: number) => `${formatNumber(value * 100)} %`;

/** Variation beyond chance, as what it means for a plan. */
export function variationInWords({ variation }: ModelDetail): string[] {
  const { sharedDayCv, dayCorrelation, outflowCv, outflowCorrelation } = variation;
  const follow = (correlation: number) =>
    correlation >= 0.3
      ? 'Such days tend to follow one another'
      : correlation >= 0.1
        ? 'Such days follow one another a little'
        : 'One day says next to nothing about the next';
  return [
    sharedDayCv < 0.02
      ? 'Whole days are hardly busier or quieter than chance alone makes them.'
      : `Whole days differ by more than chance: about one day in three is over ${share(sharedDayCv)} busier or quieter than usual in every area at once. ${follow(dayCorrelation)} (correlation ${formatNumber(dayCorrelation, 2)}).`,
    outflowCv < 0.02
      ? 'Patients leave at much the same pace on all days.'
      : `Patients leave faster or slower from day to day: about one day in three by over ${share(outflowCv)}. ${follow(outflowCorrelation)} (correlation ${formatNumber(outflowCorrelation, 2)}). This moves the need for beds more than arrivals do.`,
  ];
}
