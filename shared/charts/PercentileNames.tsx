import { halo, labelStyle } from './label-look.ts';
import type { NeedStripProps } from './need-columns.ts';

/** Names the two drawn percentiles where the water between need and staffed line is deepest. */
export function PercentileNames({ columns, columnWidth, y }: NeedStripProps & { y: (need: number) => number }) {
  const rooms = columns.map((column, index) =>
    column.kind === 'forecast' && index + 7 < columns.length
      ? Math.min(
          ...columns.slice(index, index + 7).map((at) => (at.kind === 'forecast' ? y(at.p95) - y(at.staffed) : 0)),
        )
      : 0,
  );
  const best = rooms.indexOf(Math.max(...rooms));
  const column = columns[best];
  if (column?.kind !== 'forecast' || rooms[best] < 38) return null;
  const x = best * columnWidth;
  const line = y(column.staffed);
  const text = { fontSize: 14, fontWeight: 800, fill: 'var(--ink)', style: labelStyle, ...halo };
  return (
    <>
      <line x1={x + 12} x2={x + 12} y1={line + 6} y2={y(column.p95)} stroke="var(--ink)" />
      <text x={x + 17} y={line + 17} {...text}>
        P95: 95 nights in 100 need this many or fewer
      </text>
      <line
        x1={x + columnWidth + 12}
        x2={x + columnWidth + 12}
        y1={line + 22}
        y2={y((columns[best + 1] as typeof column).p90)}
        stroke="var(--ink)"
      />
      <text x={x + columnWidth + 17} y={line + 33} {...text}>
        P90: nine nights in ten
      </text>
    </>
  );
}
