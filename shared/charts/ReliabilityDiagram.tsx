import { Group } from '@visx/group';
import { scaleLinear } from '@visx/scale';
import { LinePath } from '@visx/shape';
import { halo, labelStyle } from './label-look.ts';

export interface ReliabilityPoint {
  meanChance: number;
  share: number;
  n: number;
  se: number | null;
}

const pad = { left: 44, right: 14, top: 10, bottom: 36 };

/** Bins of fewer cases than this say little: they are drawn pale, and the line passes them by. */
const fewCases = 10;

/** Between which places, px, the chances from 0 to 1 lie in a drawing of this width. */
export function reliabilitySpan(width: number): { left: number; right: number } {
  return { left: pad.left, right: Math.min(width, 460) - pad.right };
}

/** What was said (across) against how often it came (up), with two standard errors and the number of cases; on the dashed line both agree. Decoration: a table says the same. */
export function ReliabilityDiagram({ points, width }: { points: readonly ReliabilityPoint[]; width: number }) {
  const size = Math.min(width, 460);
  const x = scaleLinear<number>({ domain: [0, 1], range: [pad.left, size - pad.right] });
  const y = scaleLinear<number>({ domain: [0, 1], range: [size - pad.bottom, pad.top] });
  const most = Math.max(1, ...points.map(({ n }) => n));
  const ticks = [0, 0.25, 0.5, 0.75, 1];
  return (
    <svg width={size} height={size} viewBox={`0 0 ${String(size)} ${String(size)}`} aria-hidden="true">
      {ticks.map((tick) => (
        <Group key={tick}>
          <line x1={x(0)} x2={x(1)} y1={y(tick)} y2={y(tick)} stroke="var(--hair)" />
          <text x={pad.left - 6} y={y(tick) + 4} textAnchor="end" fontSize={13} fill="var(--ink2)" style={labelStyle}>
            {`${String(100 * tick)} %`}
          </text>
          <text x={x(tick)} y={size - 20} textAnchor="middle" fontSize={13} fill="var(--ink2)" style={labelStyle}>
            {`${String(100 * tick)} %`}
          </text>
        </Group>
      ))}
      <line x1={x(0)} y1={y(0)} x2={x(1)} y2={y(1)} stroke="var(--act)" strokeWidth={2} strokeDasharray="6 4" />
      <text x={x(1)} y={size - 4} textAnchor="end" fontSize={13} fontWeight={700} fill="var(--ink2)">
        chance that was said
      </text>
      <text x={x(0) + 6} y={pad.top + 12} fontSize={13} fontWeight={700} fill="var(--ink2)" {...halo}>
        how often a shortfall came
      </text>
      <LinePath
        data={points.filter(({ n }) => n >= fewCases)}
        x={(point) => x(point.meanChance)}
        y={(point) => y(point.share)}
        stroke="var(--ink)"
        strokeWidth={1.5}
      />
      {points.map((point) => {
        const few = point.n < fewCases;
        const reach = few ? 0 : 2 * (point.se ?? 0);
        return (
          <Group key={point.meanChance}>
            <line
              x1={x(point.meanChance)}
              x2={x(point.meanChance)}
              y1={y(Math.max(0, point.share - reach))}
              y2={y(Math.min(1, point.share + reach))}
              stroke="var(--ink)"
              strokeWidth={2}
            />
            <circle
              cx={x(point.meanChance)}
              cy={y(point.share)}
              r={3.5 + 5 * Math.sqrt(point.n / most)}
              fill={few ? 'var(--g4)' : 'var(--g1)'}
              stroke={few ? 'var(--edge)' : 'var(--ink)'}
              strokeWidth={1.5}
            />
          </Group>
        );
      })}
      {points.map((point, index) => {
        // Names of points that would lie on each other are left to the table.
        const before = points.at(index - 1);
        if (index > 0 && before && x(point.meanChance) - x(before.meanChance) < 34) return null;
        return (
          <text
            key={point.meanChance}
            x={x(point.meanChance) + 10}
            y={y(point.share) - 10}
            fontSize={13}
            fontWeight={700}
            fill="var(--ink)"
            style={labelStyle}
            {...halo}
          >
            {String(point.n)}
          </text>
        );
      })}
    </svg>
  );
}
