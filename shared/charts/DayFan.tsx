import { Group } from '@visx/group';
import { scaleLinear } from '@visx/scale';
import { Bar } from '@visx/shape';

/** One day's arrivals: what is forecast, and what the same weekday brought of late. */
export interface FanDay {
  /** "Wed" and "2 Dec". */
  name: string;
  date: string;
  p2_5: number;
  p10: number;
  p25: number;
  p50: number;
  p75: number;
  p90: number;
  p97_5: number;
  /** Mean of the same weekday in the last weeks; null where no log speaks. */
  usual: number | null;
  /** Of an unusual day. */
  marked: boolean;
}

const gutter = 4;
const top = 40;
const bottom = 58;

/**
 * Arrivals by day as stepped fans of 50, 80 and 95 %, each with its middle figure and its 95 % range in figures. Narrow, so
 * that it reads on a phone; scaled up it loses nothing.
 */
export function DayFan({
  days,
  width = 372,
  height = 250,
}: {
  days: readonly FanDay[];
  width?: number;
  height?: number;
}) {
  const highest = Math.max(1, ...days.map((day) => Math.max(day.p97_5, day.usual ?? 0)));
  const lowest = Math.min(...days.map((day) => Math.min(day.p2_5, day.usual ?? Infinity)));
  // A cut axis: the differences between days are what is looked for; the figures say the rest.
  const y = scaleLinear<number>({
    domain: [Math.max(0, lowest - (highest - lowest) * 0.4), highest],
    range: [height - bottom, top],
  });
  const step = (width - 2 * gutter) / Math.max(1, days.length);
  const column = step - 4;
  const middle = column / 2;
  return (
    <svg width={width} height={height} viewBox={`0 0 ${String(width)} ${String(height)}`} aria-hidden="true">
      {days.map((day, index) => {
        const band = (low: number, high: number, fill: string, inset: number) => (
          <Bar
            x={inset}
            width={column - 2 * inset}
            y={y(high)}
            height={Math.max(1, y(low) - y(high))}
            fill={`var(--${fill})`}
          />
        );
        return (
          <Group key={day.date} left={gutter + index * step + 2}>
            {band(day.p2_5, day.p97_5, 'f3', 0)}
            {band(day.p10, day.p90, 'f2', 3)}
            {band(day.p25, day.p75, 'f1', 6)}
            <Bar x={0} width={column} y={y(day.p50) - 1} height={2} fill="var(--ink)" />
            {day.usual === null ? null : (
              <circle cx={middle} cy={y(day.usual)} r={3.5} fill="var(--water)" stroke="var(--ink)" strokeWidth={2} />
            )}
            <text x={middle} y={y(day.p97_5) - 8} textAnchor="middle" fontSize={16} fontWeight={700} fill="var(--ink)">
              {Math.round(day.p50)}
            </text>
            <text x={middle} y={height - 40} textAnchor="middle" fontSize={14} fontWeight={700} fill="var(--ink)">
              {day.name}
            </text>
            <text x={middle} y={height - 25} textAnchor="middle" fontSize={12} fill="var(--ink2)">
              {day.date}
            </text>
            <text x={middle} y={height - 9} textAnchor="middle" fontSize={11} fill="var(--ink2)">
              {`${String(Math.round(day.p2_5))}–${String(Math.round(day.p97_5))}`}
            </text>
            {day.marked ? (
              <rect
                x={-5}
                y={-5}
                width={10}
                height={10}
                fill="var(--ink)"
                transform={`translate(${String(middle)} 10) rotate(45)`}
              />
            ) : null}
          </Group>
        );
      })}
    </svg>
  );
}
