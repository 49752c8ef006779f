import { halo, labelStyle } from './label-look.ts';
import { placeOf } from './need-columns.ts';
import type { NeedStripProps } from './need-columns.ts';

interface Step {
  x: number;
  beds: number;
}

/** The steps that have room for their count: the one in force at the first hour ahead, then each later one. */
function labelsOf(steps: readonly Step[], firstAhead: number, unit: string): (Step & { text: string })[] {
  const inForce = steps.findLast((step) => step.x <= firstAhead);
  const ahead = steps.filter((step) => step.x > firstAhead);
  const labels: (Step & { text: string })[] = [];
  let free = -Infinity;
  for (const [index, step] of [...(inForce ? [{ x: firstAhead, beds: inForce.beds }] : []), ...ahead].entries()) {
    const text = `${String(step.beds)} ${unit}`;
    const next = ahead[inForce ? index : index + 1]?.x ?? Infinity;
    const room = text.length * 6.8 + 6;
    // Of two that would touch, the one that holds for longer is printed.
    if (step.x < free || next - step.x < Math.min(room, 30)) continue;
    labels.push({ x: step.x + 6, beds: step.beds, text });
    free = step.x + room;
  }
  return labels;
}

/** The staffed beds as the heaviest line, stepping at their true time, with the count printed on each step. */
export function StaffedLine({
  columns,
  staffed,
  columnWidth,
  tall = false,
  unit = 'staffed',
  y,
  width,
}: NeedStripProps & { y: (need: number) => number; width: number }) {
  if (columns.length === 0 || staffed.length === 0) return null;
  const start = columns[0].at;
  const steps = staffed
    .filter((_, index) => index === staffed.length - 1 || staffed[index + 1].at > start)
    .map((step) => ({ x: placeOf(columns, step.at) * columnWidth, beds: step.beds }))
    .filter((step) => step.x < width);
  const line = steps.map(({ x, beds }, index) =>
    index === 0 ? `M${String(x)} ${String(y(beds))}` : `H${String(x)}V${String(y(beds))}`,
  );
  const firstAhead =
    Math.max(
      0,
      columns.findIndex((column) => column.kind === 'forecast'),
    ) * columnWidth;
  return (
    <>
      <path d={`${line.join('')}H${String(width)}`} fill="none" stroke="var(--staff)" strokeWidth={tall ? 3 : 2.2} />
      {labelsOf(steps, firstAhead, unit).map((label) => (
        <text
          key={label.x}
          x={label.x}
          y={y(label.beds) - 6}
          fontSize={14}
          fontWeight={800}
          fill="var(--ink)"
          style={labelStyle}
          {...halo}
        >
          {label.text}
        </text>
      ))}
    </>
  );
}
