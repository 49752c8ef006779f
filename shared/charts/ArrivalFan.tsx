import { Group } from '@visx/group';
import { scaleLinear } from '@visx/scale';
import { Bar } from '@visx/shape';
import { halo } from './label-look.ts';

/** Arrivals of one hour: what is forecast, what came, or both. */
export interface FanHour {
  from: number;
  forecast: { p2_5: number; p10: number; p25: number; p75: number; p90: number; p97_5: number } | null;
  /** What came; null where no log speaks. */
  actual: number | null;
}

/** One column of the board: a shift with its hours, and the day's figures where a whole day begins. */
export interface FanColumn {
  from: number;
  hours: readonly FanHour[];
  day: { middle: string; range: string; columns: number } | null;
}

const labelRoom = 44;

/**
 * Arrivals by hour as stepped fans of 50, 80 and 95 %, every shift one column wide, so that hours are narrower in longer
 * shifts; over them each day's middle figure and its 95 % range. What came is an ink step.
 */
export function ArrivalFan({
  columns,
  columnWidth,
  height,
}: {
  columns: readonly FanColumn[];
  columnWidth: number;
  height: number;
}) {
  const width = columns.length * columnWidth;
  const highest = Math.max(
    1,
    ...columns.flatMap(({ hours }) => hours.map((hour) => Math.max(hour.forecast?.p97_5 ?? 0, hour.actual ?? 0))),
  );
  const y = scaleLinear<number>({ domain: [0, highest], range: [height, labelRoom] });
  const hours = columns.flatMap(({ hours: own }, column) =>
    own.map((hour, index) => ({
      ...hour,
      x: column * columnWidth + (index * columnWidth) / own.length,
      width: columnWidth / own.length,
    })),
  );
  // A new stroke where the hour before is not known.
  const path = hours
    .map(({ actual, x, width: wide }, index) => {
      if (actual === null) return '';
      const joined = index > 0 && hours[index - 1].actual !== null;
      return `${joined ? 'L' : 'M'}${String(x)} ${String(y(actual))}H${String(x + wide)}`;
    })
    .join('');
  return (
    <svg
      width={width}
      height={height}
      viewBox={`0 0 ${String(width)} ${String(height)}`}
      overflow="visible"
      aria-hidden="true"
    >
      {hours.map(({ from, forecast, x, width: wide }) =>
        forecast ? (
          <Group key={from} left={x}>
            <Bar
              width={wide + 0.3}
              y={y(forecast.p97_5)}
              height={y(forecast.p2_5) - y(forecast.p97_5)}
              fill="var(--f3)"
            />
            <Bar width={wide + 0.3} y={y(forecast.p90)} height={y(forecast.p10) - y(forecast.p90)} fill="var(--f2)" />
            <Bar
              width={wide + 0.3}
              y={y(forecast.p75)}
              height={Math.max(1, y(forecast.p25) - y(forecast.p75))}
              fill="var(--f1)"
            />
          </Group>
        ) : null,
      )}
      <path d={path} fill="none" stroke="var(--ink)" strokeWidth={1.6} />
      {columns.map(({ from, day }, index) =>
        day ? (
          <g key={from} transform={`translate(${String(index * columnWidth)} 0)`}>
            <rect x={-0.5} y={0} width={1} height={height} fill="var(--edge)" />
            <text x={5} y={18} fontSize={19} fontWeight={800} fill="var(--ink)" {...halo}>
              {day.middle}
            </text>
            {day.range.length * 6.6 < day.columns * columnWidth ? (
              <text
                x={5}
                y={35}
                fontSize={13.5}
                fontWeight={600}
                fill="var(--ink2)"
                style={{ fontStretch: '84%' }}
                {...halo}
              >
                {day.range}
              </text>
            ) : null}
          </g>
        ) : null,
      )}
    </svg>
  );
}
