import type { ArrivalEvaluation } from '../../shared/forecasting/evaluate-arrivals.ts';
import { countLevels } from '../../shared/forecasting/count-levels.ts';
import { needLeads, type NeedEvaluation } from '../../shared/forecasting/evaluate-need.ts';
import type { ScoreSummary } from '../../shared/forecasting/score-summary.ts';

const fixed = (value: number | null, digits: number): string => (value === null ? '–' : value.toFixed(digits));
const share = (value: number | null): string => (value === null ? '–' : (100 * value).toFixed(1));

function meanPinball(score: ScoreSummary): number | null {
  const losses = Object.values(score.pinball).filter((loss) => loss !== null);
  return losses.length > 0 ? losses.reduce((sum, loss) => sum + loss, 0) / losses.length : null;
}

function row(name: string, score: ScoreSummary): string {
  const covered = (level: string): string => {
    const { observed, expected, se } = score.coverage[level];
    return `${share(observed)} of ${share(expected)} ± ${share(se)}`;
  };
  return [
    name.padEnd(18),
    String(score.n).padStart(6),
    fixed(score.logScore, 4).padStart(9),
    fixed(score.mae, 3).padStart(8),
    fixed(score.mase, 3).padStart(6),
    fixed(meanPinball(score), 3).padStart(8),
    covered('0.5').padStart(20),
    covered('0.9').padStart(20),
  ].join('  ');
}

const heading = [
  ''.padEnd(18),
  'n'.padStart(6),
  'log score'.padStart(9),
  'MAE'.padStart(8),
  'MASE'.padStart(6),
  'pinball'.padStart(8),
  'within 50 %'.padStart(20),
  'within 90 %'.padStart(20),
].join('  ');

/** The evaluation as a table to read. Coverage: observed of the interval's exact mass, ± its standard error, per cent. */
export function evaluationText(arrivals: ArrivalEvaluation, need: NeedEvaluation | null): string {
  const lines: string[] = [];
  for (const level of countLevels) {
    lines.push(`Arrivals by ${level}, one week ahead`, heading, row('model', arrivals.model[level]));
    for (const [name, scores] of Object.entries(arrivals.baselines)) lines.push(row(name, scores[level]));
    lines.push('');
  }
  lines.push('Arrivals by day, by days ahead', heading);
  for (const { daysAhead, score } of arrivals.byLead) lines.push(row(`${String(daysAhead)} days ahead`, score));
  if (need) {
    lines.push('', `Need of the whole department, ${String(need.outlooks)} outlooks`, heading);
    for (const lead of needLeads) lines.push(row(`${String(lead)} h ahead`, need.need[`${lead}h`]));
    lines.push('', 'Need by care area', heading);
    for (const lead of needLeads) lines.push(row(`${String(lead)} h ahead`, need.needByArea[`${lead}h`]));
    lines.push('', `Chance of need above its 90 % point: Brier score ${fixed(need.shortfall.brier, 4)}`);
    for (const bin of need.shortfall.reliability) {
      lines.push(`  said ${share(bin.meanChance)} %, came true ${share(bin.observedShare)} % (${String(bin.n)} cases)`);
    }
  }
  return `${lines.join('\n')}\n`;
}
