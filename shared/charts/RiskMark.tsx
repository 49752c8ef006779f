import type { RiskStep } from '../domain/risk-word.ts';

/** Bank and surface of each mark on a 20 x 16 grid: [x, y, width, height]. */
const shapes: Record<RiskStep, readonly (readonly [number, number, number, number])[]> = {
  1: [
    [4, 14.5, 4.05, 1.5],
    [8, 13.5, 4.05, 2.5],
    [12, 14.5, 4.05, 1.5],
    [0, 7, 20, 1.7],
  ],
  2: [
    [4, 13.5, 4.05, 2.5],
    [8, 11, 4.05, 5],
    [12, 13, 4.05, 3],
    [0, 7, 20, 1.7],
  ],
  3: [
    [4, 12, 4.05, 4],
    [8, 8, 4.05, 8],
    [12, 11, 4.05, 5],
    [0, 7, 20, 1.7],
  ],
  4: [
    [4, 11, 4.05, 5],
    [8, 2.5, 4.05, 13.5],
    [12, 9.5, 4.05, 6.5],
    [0, 7, 6.8, 1.7],
    [13.2, 7, 6.8, 1.7],
  ],
  5: [
    [4, 5, 4.05, 11],
    [8, 0.5, 4.05, 15.5],
    [12, 3.5, 4.05, 12.5],
    [0, 7, 2.8, 1.7],
    [17.2, 7, 2.8, 1.7],
  ],
};

/**
 * The mark of a risk step: one bank at five heights against the surface, so that it reads without
 * colour. Always beside its word or with the word in the accessible name.
 */
export function RiskMark({
  step,
  className,
  ...place
}: {
  step: RiskStep;
  className?: string;
  x?: number;
  y?: number;
  width?: number;
  height?: number;
  fill?: string;
}) {
  return (
    <svg viewBox="0 0 20 16" aria-hidden="true" fill="currentColor" className={className} {...place}>
      {shapes[step].map(([x, y, width, height]) => (
        <rect key={`${String(x)} ${String(y)}`} x={x} y={y} width={width} height={height} />
      ))}
    </svg>
  );
}
