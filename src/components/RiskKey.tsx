import { RiskMark } from '../../shared/charts/RiskMark.tsx';
import { riskWords } from '../../shared/domain/risk-word.ts';
import type { RiskStep } from '../../shared/domain/risk-word.ts';

const bounds = ['0–4', '5–24', '25–49', '50–79', '80+'];
const looks = ['bg-r1 text-r1i', 'bg-r2 text-r2i', 'bg-r3 text-r3i', 'bg-r4 text-r4i', 'bg-r5 text-r5i'];

/** What the words and marks stand for, in whole per cents. */
export function RiskKey() {
  return (
    <ul
      className="flex flex-wrap items-center gap-x-6 gap-y-1 text-quiet text-ink2"
      aria-label="Words of risk, in per cent"
    >
      {riskWords.map((word, index) => (
        <li key={word} className="flex items-center gap-2">
          <span className={`flex h-5 w-8 items-center justify-center ${looks[index]}`}>
            <RiskMark step={(index + 1) as RiskStep} className="h-4 w-5" />
          </span>
          {word} {bounds[index]}
        </li>
      ))}
      <li className="flex items-center gap-2">
        <span className="inline-block h-[3px] w-8 bg-ink" /> Past the area’s limit
      </li>
    </ul>
  );
}
