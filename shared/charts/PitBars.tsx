import { scaleLinear } from '@visx/scale';
import { Bar } from '@visx/shape';
import { halo, labelStyle } from './label-look.ts';

const height = 170;
const foot = 24;

/** Where within its range what came fell, in tenths: level bars mean that the ranges are right. Decoration: a table says the same. */
export function PitBars({ heights, width }: { heights: readonly number[]; width: number }) {
  const most = Math.max(1.6, ...heights);
  const y = scaleLinear<number>({ domain: [0, most], range: [height - foot, 14] });
  const step = (width - 4) / Math.max(1, heights.length);
  return (
    <svg width={width} height={height} viewBox={`0 0 ${String(width)} ${String(height)}`} aria-hidden="true">
      {heights.map((value, index) => (
        <Bar
          key={index}
          x={2 + index * step}
          y={y(value)}
          width={Math.max(1, step - 2)}
          height={Math.max(1, height - foot - y(value))}
          fill="var(--g2)"
        />
      ))}
      <line x1={0} x2={width} y1={y(1)} y2={y(1)} stroke="var(--act)" strokeWidth={2} strokeDasharray="6 4" />
      <text x={4} y={y(1) - 5} fontSize={13} fontWeight={700} fill="var(--ink)" style={labelStyle} {...halo}>
        as many as there should be
      </text>
      <text x={2} y={height - 6} fontSize={13} fill="var(--ink2)" style={labelStyle}>
        low end of the range
      </text>
      <text x={width - 2} y={height - 6} textAnchor="end" fontSize={13} fill="var(--ink2)" style={labelStyle}>
        high end
      </text>
    </svg>
  );
}
