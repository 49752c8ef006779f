import { Group } from '@visx/group';
import { Bar } from '@visx/shape';
import { ActualStep } from './ActualStep.tsx';
import { halo, labelStyle } from './label-look.ts';
import { bandsOf, needDomain, needScale } from './need-columns.ts';
import type { NeedColumn, NeedStripProps } from './need-columns.ts';
import { PercentileNames } from './PercentileNames.tsx';
import { StaffedLine } from './StaffedLine.tsx';

const labelRoom = 20;

/**
 * Need against staffed beds, hour by hour: sand rises from the foot, sure to unsure; what passes
 * the line is ember and hatched. Decoration for the eye: the table beside it says the same.
 */
export function NeedStrip(props: NeedStripProps) {
  const { id, columns, columnWidth, height, tall = false, counted } = props;
  const width = columns.length * columnWidth;
  const { low, high, cut } = needDomain(columns, tall);
  const y = needScale(low, high, height, labelRoom);
  const top = (need: number) => y(Math.max(low, need));
  const barWidth = columnWidth - 1;

  return (
    <svg
      width={width}
      height={height}
      viewBox={`0 0 ${String(width)} ${String(height)}`}
      overflow="visible"
      aria-hidden="true"
    >
      <defs>
        <pattern id={`${id}-hatch`} width="5" height="5" patternUnits="userSpaceOnUse" patternTransform="rotate(45)">
          <rect width="1.4" height="5" fill="var(--hatch)" opacity=".55" />
        </pattern>
        <linearGradient id={`${id}-fade`} x1="0" y1="0" x2="0" y2="1">
          <stop offset="0" stopColor="var(--water)" stopOpacity="0" />
          <stop offset="1" stopColor="var(--water)" />
        </linearGradient>
      </defs>
      {columns.map((column, index) => (
        <Group key={column.at} left={index * columnWidth}>
          {column.kind === 'past' ? (
            <PastColumn present={column.present} top={top} barWidth={barWidth} height={height} />
          ) : (
            <ForecastColumn
              column={column}
              top={top}
              barWidth={barWidth}
              counted={counted}
              tall={tall}
              hatch={`${id}-hatch`}
            />
          )}
        </Group>
      ))}
      {cut ? <Bar x={0} y={height - 26} width={width} height={26} fill={`url(#${id}-fade)`} /> : null}
      {columns.map((column, index) =>
        column.kind === 'past' && column.present === null ? (
          <OpenColumn key={column.at} x={index * columnWidth} barWidth={barWidth} height={height} />
        ) : null,
      )}
      <NotCounted columns={columns} columnWidth={columnWidth} height={height} />
      <StaffedLine {...props} y={y} width={width} />
      <ActualStep columns={columns} columnWidth={columnWidth} named={tall} y={top} />
      <NowLabel {...props} top={top} />
      {props.namePercentiles && counted ? <PercentileNames {...props} y={y} /> : null}
    </svg>
  );
}

type Top = (need: number) => number;

function PastColumn({
  present,
  top,
  barWidth,
  height,
}: {
  present: number | null;
  top: Top;
  barWidth: number;
  height: number;
}) {
  if (present === null) return null;
  return (
    <>
      <Bar x={0} y={top(present)} width={barWidth} height={height - top(present)} fill="var(--g1)" />
      <Bar x={0} y={top(present) - 0.75} width={barWidth} height={1.5} fill="var(--g-line)" />
    </>
  );
}

/** Nothing is known of this hour: sides and foot without a top, since any height would be invented. */
function OpenColumn({ x, barWidth, height }: { x: number; barWidth: number; height: number }) {
  const reach = Math.min(height - labelRoom, 30);
  return (
    <path
      d={`M${String(x + 0.5)} ${String(height - reach)}V${String(height - 0.5)}H${String(x + barWidth - 0.5)}V${String(height - reach)}`}
      fill="none"
      stroke="var(--edge)"
      strokeDasharray="3 3"
    />
  );
}

/** Says it in words at the end of each run of hours of which nothing is known that has room for them. */
function NotCounted({ columns, columnWidth, height }: Pick<NeedStripProps, 'columns' | 'columnWidth' | 'height'>) {
  const unknown = (index: number) => {
    const column = columns.at(index);
    return column?.kind === 'past' && column.present === null;
  };
  return columns.map((column, index) => {
    if (!unknown(index) || (index + 1 < columns.length && unknown(index + 1))) return null;
    if (index < 1 || !unknown(index - 1)) return null;
    return (
      <text
        key={column.at}
        x={(index + 1) * columnWidth - 5}
        y={height - 9}
        textAnchor="end"
        fontSize={13}
        fontWeight={600}
        fill="var(--ink2)"
        style={labelStyle}
        {...halo}
      >
        not counted
      </text>
    );
  });
}

function ForecastColumn({
  column,
  top,
  barWidth,
  counted,
  tall,
  hatch,
}: {
  column: NeedColumn & { kind: 'forecast' };
  top: Top;
  barWidth: number;
  counted: boolean;
  tall: boolean;
  hatch: string;
}) {
  if (!counted) {
    return (
      <rect
        x={0.5}
        y={top(column.p95)}
        width={barWidth - 1}
        height={Math.max(1, top(column.p5) - top(column.p95))}
        fill="none"
        stroke="var(--edge)"
        strokeDasharray="3 3"
      />
    );
  }
  return (
    <>
      {bandsOf(column).map((band) => {
        const place = { x: 0, y: top(band.to), width: barWidth, height: Math.max(0, top(band.from) - top(band.to)) };
        return (
          <Group key={`${String(band.from)} ${String(band.certainty)}`}>
            <Bar {...place} fill={`var(--${band.short ? 's' : 'g'}${String(band.certainty)})`} />
            {band.short ? <Bar {...place} fill={`url(#${hatch})`} /> : null}
          </Group>
        );
      })}
      <line
        x1={0}
        x2={barWidth}
        y1={top(column.p90)}
        y2={top(column.p90)}
        stroke="var(--g-line)"
        strokeWidth={1.5}
        strokeDasharray="2 2"
      />
      {tall ? (
        <Bar
          x={barWidth / 2 - 4.5}
          y={top(column.p50) - 1.25}
          width={9}
          height={2.5}
          fill={column.p50 > column.staffed ? 'var(--hatch)' : 'var(--g-line)'}
        />
      ) : null}
    </>
  );
}

function NowLabel({ columns, columnWidth, presentNow, then = false, top }: NeedStripProps & { top: Top }) {
  if (presentNow === undefined || presentNow === null) return null;
  const firstForecast = columns.findIndex((column) => column.kind === 'forecast');
  if (firstForecast < 1) return null;
  return (
    <text
      x={firstForecast * columnWidth - 8}
      y={Math.max(labelRoom + 22, top(presentNow) + 20)}
      textAnchor="end"
      fontSize={15}
      fontWeight={800}
      fill="var(--ink)"
      style={labelStyle}
      {...halo}
    >
      {`${String(presentNow)} ${then ? 'then' : 'now'}`}
    </text>
  );
}
