import { Group } from '@visx/group';
import { scaleLinear } from '@visx/scale';
import { Bar } from '@visx/shape';
import { labelStyle } from './label-look.ts';

export interface RangeColumn {
  key: string;
  label: string;
  low90: number;
  high90: number;
  low50: number;
  high50: number;
  median: number;
  observed: number;
}

const rangeHeight = 230;
const pad = { left: 34, top: 10, bottom: 24 };

/** Ranges that were issued, one a column, and what came as a dot: ink within its 90 % range, ember and open outside. Decoration: a table says the same. */
export function RangeColumns({ columns, columnWidth }: { columns: readonly RangeColumn[]; columnWidth: number }) {
  const width = pad.left + columns.length * columnWidth;
  const high = Math.max(1, ...columns.map((column) => Math.max(column.high90, column.observed)));
  const low = Math.min(...columns.map((column) => Math.min(column.low90, column.observed)), high);
  const floor = low > high / 3 ? Math.floor(low * 0.8) : 0;
  const y = scaleLinear<number>({ domain: [floor, high * 1.05], range: [rangeHeight - pad.bottom, pad.top] });
  const wide = Math.max(3, columnWidth - 3);
  return (
    <svg width={width} height={rangeHeight} viewBox={`0 0 ${String(width)} ${String(rangeHeight)}`} aria-hidden="true">
      {y.ticks(4).map((tick) => (
        <Group key={tick}>
          <line x1={pad.left} x2={width} y1={y(tick)} y2={y(tick)} stroke="var(--hair)" />
          <text x={pad.left - 5} y={y(tick) + 4} textAnchor="end" fontSize={13} fill="var(--ink2)" style={labelStyle}>
            {String(tick)}
          </text>
        </Group>
      ))}
      {columns.map((column, index) => {
        const x = pad.left + index * columnWidth;
        const outside = column.observed < column.low90 || column.observed > column.high90;
        return (
          <Group key={column.key} left={x}>
            <Bar
              x={1}
              y={y(column.high90)}
              width={wide}
              height={Math.max(1, y(column.low90) - y(column.high90))}
              fill="var(--g4)"
            />
            <Bar
              x={1}
              y={y(column.high50)}
              width={wide}
              height={Math.max(1, y(column.low50) - y(column.high50))}
              fill="var(--g2)"
            />
            <Bar x={1} y={y(column.median) - 1} width={wide} height={2} fill="var(--g-line)" />
            {outside ? (
              <path
                d={`M${String(wide / 2 - 3)} ${String(y(column.observed) - 4)}l8 8m0 -8l-8 8`}
                stroke="var(--s1)"
                strokeWidth={2.5}
                fill="none"
              />
            ) : (
              <circle cx={1 + wide / 2} cy={y(column.observed)} r={3.2} fill="var(--ink)" />
            )}
            {column.label === '' ? null : (
              <text x={0} y={rangeHeight - 6} fontSize={13} fill="var(--ink2)" style={labelStyle}>
                {column.label}
              </text>
            )}
          </Group>
        );
      })}
    </svg>
  );
}
