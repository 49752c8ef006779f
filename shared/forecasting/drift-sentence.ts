import type { DriftFinding } from './drift-watch.ts';

/** A finding of the watch in words, with what to do: "Arrivals have run 9 % above the forecast since 3 Mar …". */
export function driftSentence(finding: Pick<DriftFinding, 'series' | 'kind' | 'ratio'>, sinceDate: string): string {
  const what = finding.series === 'arrivals' ? 'Arrivals' : 'Need';
  const percent = Math.round(100 * Math.abs(finding.ratio - 1));
  if (finding.kind === 'ranges too narrow') {
    return `The ranges of ${what.toLowerCase()} have been too narrow since the week of ${sinceDate}: leave more room than they show. Have the model fitted anew.`;
  }
  const size = percent === 0 ? '' : `${String(percent)} % `;
  const side = finding.kind === 'more than forecast' ? 'above' : 'below';
  const have = finding.series === 'arrivals' ? 'have' : 'has';
  return `${what} ${have} run ${size}${side} the forecast since the week of ${sinceDate}, more than chance explains. Have the model fitted anew.`;
}
