import { RiskMark } from '../../../shared/charts/RiskMark.tsx';
import { formatChance, riskStep, riskWord } from '../../../shared/domain/risk-word.ts';
import { classNames } from '../../lib/class-names.ts';

const tones = ['bg-r1 text-r1i', 'bg-r2 text-r2i', 'bg-r3 text-r3i', 'bg-r4 text-r4i', 'bg-r5 text-r5i'];

/** A chance as number, mark and word on its tone. */
export function RiskFigure({ chance }: { chance: number }) {
  const step = riskStep(chance);
  return (
    <span
      className={classNames(
        'inline-flex items-center gap-1.5 px-2 py-1 text-cell whitespace-nowrap print:border print:border-edge',
        tones[step - 1],
      )}
    >
      {formatChance(chance).replace(' ', '\u00a0')}
      <RiskMark step={step} className="h-3.5 w-4.5" />
      {riskWord(chance)}
    </span>
  );
}
