import { Group } from '@visx/group';
import { scaleLinear } from '@visx/scale';
import { Bar } from '@visx/shape';
import { halo, labelStyle } from './label-look.ts';

export interface CoverageRow {
  level: number;
  observed: number;
  /** The mass that the intervals really held; null where it is not known. */
  expected: number | null;
  se: number | null;
}

const rowHeight = 46;
const left = 62;

/** How much of what came lay within each interval (bar, with two standard errors), against what the interval was to hold (stroke). Decoration: a table says the same. */
export function CoverageRows({ rows, width }: { rows: readonly CoverageRow[]; width: number }) {
  const x = scaleLinear<number>({ domain: [0, 1], range: [left, Math.max(left + 80, width - 12)] });
  const height = rows.length * rowHeight + 22;
  return (
    <svg width={width} height={height} viewBox={`0 0 ${String(width)} ${String(height)}`} aria-hidden="true">
      {[0, 0.25, 0.5, 0.75, 1].map((tick) => (
        <Group key={tick}>
          <line x1={x(tick)} x2={x(tick)} y1={0} y2={height - 20} stroke="var(--hair)" />
          <text
            x={x(tick)}
            y={height - 5}
            textAnchor={tick === 1 ? 'end' : 'middle'}
            fontSize={13}
            fill="var(--ink2)"
            style={labelStyle}
          >
            {`${String(100 * tick)} %`}
          </text>
        </Group>
      ))}
      {rows.map(({ level, observed, expected, se }, index) => {
        const middle = index * rowHeight + 20;
        const reach = 2 * (se ?? 0);
        const said = `${(100 * observed).toFixed(1)} %`;
        return (
          <Group key={level}>
            <text x={0} y={middle + 5} fontSize={14} fontWeight={800} fill="var(--ink)">
              {`${String(Math.round(100 * level))} %`}
            </text>
            <Bar x={left} y={middle - 9} width={Math.max(1, x(observed) - left)} height={18} fill="var(--g2)" />
            <line
              x1={x(Math.max(0, observed - reach))}
              x2={x(Math.min(1, observed + reach))}
              y1={middle}
              y2={middle}
              stroke="var(--ink)"
              strokeWidth={2}
            />
            {expected === null ? null : (
              <Bar x={x(expected) - 1.5} y={middle - 15} width={3} height={30} fill="var(--act)" />
            )}
            <text
              x={left + 8}
              y={middle + 5}
              fontSize={14}
              fontWeight={800}
              fill="var(--ink)"
              style={labelStyle}
              {...halo}
            >
              {expected === null ? said : `${said} of ${(100 * expected).toFixed(1)} %`}
            </text>
          </Group>
        );
      })}
    </svg>
  );
}
