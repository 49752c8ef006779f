import { halo, labelStyle } from './label-look.ts';
import type { NeedColumn } from './need-columns.ts';

/** What was there when the hours came, as an ink step over an earlier forecast; hours of which nothing is known are left open. */
export function ActualStep({
  columns,
  columnWidth,
  named,
  y,
}: {
  columns: readonly NeedColumn[];
  columnWidth: number;
  /** Says what the step is; a short strip has no room for it. */
  named: boolean;
  y: (need: number) => number;
}) {
  const known = columns.flatMap((column, index) =>
    column.kind === 'forecast' && typeof column.actual === 'number' ? [{ index, actual: column.actual }] : [],
  );
  if (known.length === 0) return null;
  const path = known.map(({ index, actual }, place) => {
    const follows = place > 0 && known[place - 1].index === index - 1;
    const x = index * columnWidth;
    return `${follows ? `V${String(y(actual))}` : `M${String(x)} ${String(y(actual))}`}H${String(x + columnWidth - 1)}`;
  });
  const [first] = known;
  return (
    <>
      <path d={path.join('')} fill="none" stroke="var(--water)" strokeWidth={5.5} />
      <path d={path.join('')} fill="none" stroke="var(--ink)" strokeWidth={2.5} strokeDasharray="7 2" />
      {named ? (
        <text
          x={first.index * columnWidth + 4}
          y={y(first.actual) + 16}
          fontSize={14}
          fontWeight={800}
          fill="var(--ink)"
          style={labelStyle}
          {...halo}
        >
          {`${String(first.actual)} were there`}
        </text>
      ) : null}
    </>
  );
}
