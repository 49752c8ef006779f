import { scaleLinear } from '@visx/scale';

/** A figure with its limits on a scale that starts at 0: a line between the limits, a stroke at the figure. */
export function IntervalMark({
  value,
  low,
  high,
  max,
  width = 160,
  height = 20,
}: {
  value: number;
  low: number;
  high: number;
  /** End of the scale, the same for all rows that are compared. */
  max: number;
  width?: number;
  height?: number;
}) {
  const x = scaleLinear<number>({ domain: [0, max], range: [0, width], clamp: true });
  const middle = height / 2;
  return (
    <svg width={width} height={height} viewBox={`0 0 ${String(width)} ${String(height)}`} aria-hidden="true">
      <line x1={0} x2={width} y1={middle} y2={middle} stroke="var(--hair)" />
      <line
        x1={x(low)}
        x2={Math.max(x(high), x(low) + 1)}
        y1={middle}
        y2={middle}
        stroke="var(--edge)"
        strokeWidth={6}
      />
      <rect x={x(value) - 1.5} y={middle - 8} width={3} height={16} fill="var(--ink)" />
    </svg>
  );
}
