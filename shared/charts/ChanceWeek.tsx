import { scaleLinear } from '@visx/scale';
import { riskStep } from '../domain/risk-word.ts';

const tones = ['var(--r1)', 'var(--r2)', 'var(--r3)', 'var(--r4)', 'var(--r5)'];
const tops = [0.25, 0.5, 1];

/** An outline in steps, one an hour. */
function stepPath(values: readonly number[], x: (h: number) => number, y: (chance: number) => number): string {
  return values
    .map((chance, h) => `${h === 0 ? 'M' : 'L'}${String(x(h))},${String(y(chance))}H${String(x(h + 1))}`)
    .join('');
}

/** The columns of one risk step, as one shape. */
function columnPath(
  values: readonly number[],
  step: number,
  x: (h: number) => number,
  y: (chance: number) => number,
  foot: number,
): string {
  return values
    .map((chance, h) =>
      riskStep(chance) === step
        ? `M${String(x(h))},${String(foot)}V${String(y(chance))}H${String(x(h + 1))}V${String(foot)}Z`
        : '',
    )
    .join('');
}

/**
 * The chance of shortfall at each full hour of a week: filled as it would be with a plan (or as it is without one), the thin
 * line as it is, dashes at the area's limit. Drawn only; the page puts a table and a sentence beside it.
 */
export function ChanceWeek({
  asIs,
  plan,
  limit,
  days,
  hourWidth,
  height = 76,
}: {
  asIs: readonly number[];
  /** Null where there is no plan to show. */
  plan: readonly number[] | null;
  limit: number;
  /** Places of the local midnights among the hours. */
  days: readonly number[];
  hourWidth: number;
  height?: number;
}) {
  const shown = plan ?? asIs;
  const highest = Math.max(limit, ...asIs, ...shown);
  const top = tops.find((value) => value >= highest * 1.05) ?? 1;
  const width = asIs.length * hourWidth;
  const foot = height - 1;
  const scale = scaleLinear<number>({ domain: [0, top], range: [foot, 12] });
  const x = (h: number): number => h * hourWidth;
  const y = (chance: number): number => Math.round(scale(Math.min(chance, top)) * 10) / 10;
  return (
    <svg width={width} height={height} aria-hidden="true" className="block">
      {days.map((h) => (
        <line key={h} x1={x(h)} x2={x(h)} y1={0} y2={height} stroke="var(--hair)" />
      ))}
      {tones.map((tone, i) => {
        const path = columnPath(shown, i + 1, x, y, foot);
        return path === '' ? null : <path key={tone} d={path} fill={tone} />;
      })}
      <path d={stepPath(shown, x, y)} fill="none" stroke="var(--ink)" strokeWidth={1.5} />
      {plan ? (
        <path d={stepPath(asIs, x, y)} fill="none" stroke="var(--act)" strokeWidth={1.5} strokeDasharray="1.5 1.5" />
      ) : null}
      <line x1={0} x2={width} y1={y(limit)} y2={y(limit)} stroke="var(--ink2)" strokeDasharray="6 4" />
      <text
        x={width - 4}
        y={y(limit) - 4}
        textAnchor="end"
        fontSize={13}
        fontWeight={700}
        fill="var(--ink2)"
        stroke="var(--water)"
        strokeWidth={4}
        paintOrder="stroke"
      >
        limit {Math.round(limit * 100)} %
      </text>
      <text
        x={4}
        y={11}
        fontSize={13}
        fontWeight={600}
        fill="var(--ink2)"
        stroke="var(--water)"
        strokeWidth={4}
        paintOrder="stroke"
      >
        {Math.round(top * 100)} %
      </text>
      <line x1={0} x2={width} y1={foot + 0.5} y2={foot + 0.5} stroke="var(--edge)" />
    </svg>
  );
}
