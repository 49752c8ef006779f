import { scaleLinear } from '@visx/scale';
import { Bar } from '@visx/shape';

/** Factors against 1 (as on average): bars from the line of 1 up or down, one a block of the day. */
export function FactorStrip({
  factors,
  max,
  width = 150,
  height = 36,
}: {
  factors: readonly number[];
  /** End of the scale, the same for all rows that are compared; at least 1. */
  max: number;
  width?: number;
  height?: number;
}) {
  const y = scaleLinear<number>({ domain: [0, Math.max(1, max)], range: [height, 0], clamp: true });
  const step = width / Math.max(1, factors.length);
  return (
    <svg width={width} height={height} viewBox={`0 0 ${String(width)} ${String(height)}`} aria-hidden="true">
      {factors.map((factor, index) => (
        <Bar
          key={index}
          x={index * step}
          y={Math.min(y(factor), y(1))}
          width={step - 1}
          height={Math.max(1, Math.abs(y(factor) - y(1)))}
          fill="var(--edge)"
        />
      ))}
      <line x1={0} x2={width} y1={y(1)} y2={y(1)} stroke="var(--ink)" strokeWidth={1.5} />
    </svg>
  );
}
