import { riskStep } from '../../shared/domain/risk-word.ts';
import type { RiskStep } from '../../shared/domain/risk-word.ts';

export interface RiskRun {
  start: number;
  length: number;
  step: RiskStep;
}

/** Runs of hours with the same step of risk, in order. */
export function riskRuns(chances: readonly number[]): RiskRun[] {
  const runs: RiskRun[] = [];
  chances.forEach((chance, start) => {
    const step = riskStep(chance);
    const last = runs.at(-1);
    if (last?.step === step) last.length += 1;
    else runs.push({ start, length: 1, step });
  });
  return runs;
}
