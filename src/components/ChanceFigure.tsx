import { formatChance } from '../../shared/domain/risk-word.ts';

/** A chance as it is printed, number and sign set close so that it fits one hour's column. */
export function ChanceFigure({ chance }: { chance: number }) {
  const [figure] = formatChance(chance).split(' ');
  return (
    <span className={figure.length > 2 ? 'tighter' : undefined}>
      {figure}
      <span className="pl-px text-[0.87em] [font-weight:inherit]">%</span>
    </span>
  );
}
