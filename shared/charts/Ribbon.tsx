import type { ShiftTime } from '../domain/shift-times.ts';
import { placeOf } from './need-columns.ts';

export interface RibbonHour {
  at: number;
  /** "21" */
  label: string;
  sky: 1 | 2 | 3 | 4;
  /** The day's name where a new day begins. */
  day: string | null;
}

/** A thing at its time that hangs from the ribbon: a change of staffed beds, for instance. */
export interface RibbonEvent {
  at: number;
  text: string;
}

const strandTops = [51, 71] as const;
const strandFills = ['var(--strand-a)', 'var(--strand-b)'] as const;
const smallLabel = { fontStretch: '80%' };
export const ribbonHeight = 92;

/**
 * The spine of a page: hours toned by daylight, the day's name where it begins, and shifts as two
 * strands. Each shift lies on the other strand than the one before, so that the overlap is the
 * handover: hatched and named.
 */
export function Ribbon({
  id,
  hours,
  shifts,
  events = [],
  columnWidth,
  viewStart = 0,
  timeOf,
}: {
  id: string;
  hours: readonly RibbonHour[];
  shifts: readonly ShiftTime[];
  events?: readonly RibbonEvent[];
  columnWidth: number;
  /** Where the first view begins, pixels: a shift that runs before it is named there. */
  viewStart?: number;
  timeOf: (at: number) => string;
}) {
  const width = hours.length * columnWidth;
  const x = (at: number) => placeOf(hours, at) * columnWidth;
  const starts = new Set(shifts.map((shift) => x(shift.from)));
  const busy: [number, number, number][] = [];
  const spans = shifts.map((shift, index) => {
    const strand = index % 2;
    const from = x(shift.from);
    const to = x(shift.to);
    const previous = shifts[index - 1];
    const handover = previous && previous.to > shift.from ? x(previous.to) : from;
    const labelX = Math.max(from, handover, to > viewStart + 40 ? viewStart : 0) + 7;
    const full = `${shift.name} ${timeOf(shift.from)}–${timeOf(shift.to)}`;
    const text = full.length * 7 + 8 < to - labelX ? full : shift.name.length * 7.4 < to - labelX ? shift.name : '';
    busy.push([strand, from, to]);
    return { shift, strand, from, to, handover, labelX, text };
  });
  const handovers = spans.filter((span) => span.handover > span.from);
  for (const span of handovers) busy.push([1 - span.strand, span.from, span.handover + 66]);

  return (
    <svg
      width={width}
      height={ribbonHeight}
      viewBox={`0 0 ${String(width)} ${String(ribbonHeight)}`}
      overflow="visible"
      aria-hidden="true"
    >
      <defs>
        <pattern id={`${id}-splice`} width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(-45)">
          <rect width="2.6" height="6" fill="var(--ink)" />
        </pattern>
      </defs>
      {hours.map((hour, index) => (
        <g key={hour.at} transform={`translate(${String(index * columnWidth)} 0)`}>
          <rect y={22} width={columnWidth + 0.5} height={28} fill={`var(--sky${String(hour.sky)})`} />
          <text
            x={5}
            y={41.5}
            fontSize={16}
            fontWeight={starts.has(index * columnWidth) ? 900 : 700}
            fill={`var(--sky${String(hour.sky)}i)`}
          >
            {hour.label}
          </text>
          {hour.day ? (
            <>
              <rect x={-1} y={2} width={2} height={48} fill="var(--ink)" />
              <text x={5} y={15} fontSize={14.5} fontWeight={750} fill="var(--ink)">
                {hour.day}
              </text>
            </>
          ) : null}
        </g>
      ))}
      {spans.map(({ shift, strand, from, to, labelX, text }) => (
        <g key={shift.from}>
          <rect x={from} y={strandTops[strand]} width={Math.max(0, to - from)} height={19} fill={strandFills[strand]} />
          {text ? (
            <text
              x={labelX}
              y={strandTops[strand] + 14.5}
              fontSize={14}
              fontWeight={700}
              fill="var(--strand-i)"
              style={{ fontStretch: '92%' }}
            >
              {text}
            </text>
          ) : null}
        </g>
      ))}
      {handovers.map(({ shift, strand, from, handover }) => (
        <g key={shift.from}>
          <rect x={from} y={51} width={handover - from} height={39} fill="var(--strand-b)" />
          <rect x={from} y={51} width={handover - from} height={39} fill={`url(#${id}-splice)`} />
          <rect x={from} y={51} width={2} height={39} fill="var(--ink)" />
          <text
            x={handover + 4}
            y={strandTops[1 - strand] + 14.5}
            fontSize={13.5}
            fontWeight={650}
            fill="var(--ink)"
            style={smallLabel}
          >
            Handover
          </text>
        </g>
      ))}
      {events.map((event) => {
        const from = x(event.at);
        const to = from + 18 + event.text.length * 6.3;
        const strand = [0, 1].find((candidate) =>
          busy.every(([taken, start, end]) => taken !== candidate || end <= from - 4 || start >= to),
        );
        if (strand === undefined || from <= 0 || to > width) return null;
        busy.push([strand, from, to]);
        return (
          <g key={`${String(event.at)} ${event.text}`}>
            <circle
              cx={from + 6}
              cy={strandTops[strand] + 9.5}
              r={4}
              fill="var(--water)"
              stroke="var(--ink)"
              strokeWidth={2}
            />
            <text
              x={from + 14}
              y={strandTops[strand] + 14.5}
              fontSize={13.5}
              fontWeight={650}
              fill="var(--ink)"
              style={smallLabel}
            >
              {event.text}
            </text>
          </g>
        );
      })}
    </svg>
  );
}
