/** One shift of the ribbon. */
export interface WeekRibbonShift {
  from: number;
  name: string;
  sky: 1 | 2 | 3 | 4;
  /** The day's name where a new day begins. */
  day: string | null;
}

/** A dated thing: a public holiday, an event, a closure. */
export interface WeekRibbonEvent {
  /** First column of the day. */
  column: number;
  columns: number;
  text: string;
  /** Unlike any day in the log. */
  unknown: boolean;
}

export const weekRibbonHeight = 74;

/** A name that fits a column: whole, or cut with a full stop. */
function fitted(name: string, room: number): string {
  const letters = Math.floor(room / 6.6);
  return name.length <= letters ? name : `${name.slice(0, Math.max(1, letters - 1))}.`;
}

/** Where each event's name stands: at its own day, or where the name before it ends; null where it has no room. */
function placeNames(events: readonly WeekRibbonEvent[], columnWidth: number, width: number): (number | null)[] {
  let free = 0;
  return events.map(({ column, text }) => {
    const at = Math.max(column * columnWidth, free);
    const end = at + text.length * 6.4 + 20;
    if (end > width) return null;
    free = end;
    return at;
  });
}

/**
 * The spine of the week: one column a shift, toned by daylight, the day's name where it begins, and a strand of dated
 * things beneath.
 */
export function WeekRibbon({
  shifts,
  events,
  columnWidth,
}: {
  shifts: readonly WeekRibbonShift[];
  events: readonly WeekRibbonEvent[];
  columnWidth: number;
}) {
  const width = shifts.length * columnWidth;
  const places = placeNames(events, columnWidth, width);
  return (
    <svg
      width={width}
      height={weekRibbonHeight}
      viewBox={`0 0 ${String(width)} ${String(weekRibbonHeight)}`}
      overflow="visible"
      aria-hidden="true"
    >
      {shifts.map((shift, index) => (
        <g key={shift.from} transform={`translate(${String(index * columnWidth)} 0)`}>
          <rect y={22} width={columnWidth + 0.5} height={28} fill={`var(--sky${String(shift.sky)})`} />
          <text
            x={columnWidth / 2}
            y={41}
            textAnchor="middle"
            fontSize={13.5}
            fontWeight={700}
            fill={`var(--sky${String(shift.sky)}i)`}
            style={{ fontStretch: '80%' }}
          >
            {fitted(shift.name, columnWidth)}
          </text>
          {shift.day ? (
            <>
              <rect x={-1} y={2} width={2} height={48} fill="var(--ink)" />
              <text x={5} y={15} fontSize={14.5} fontWeight={750} fill="var(--ink)">
                {shift.day}
              </text>
            </>
          ) : null}
        </g>
      ))}
      <rect y={51} width={width} height={21} fill="var(--strand-a)" />
      {events.map((event, index) => {
        const from = event.column * columnWidth;
        const at = places[index];
        return (
          <g key={`${String(event.column)} ${event.text}`}>
            <rect x={from} y={51} width={event.columns * columnWidth} height={21} fill="var(--strand-b)" />
            {at !== null ? (
              <>
                <circle cx={at + 7} cy={61.5} r={4} fill="var(--water)" stroke="var(--ink)" strokeWidth={2} />
                <text
                  x={at + 15}
                  y={66}
                  fontSize={13.5}
                  fontWeight={event.unknown ? 850 : 650}
                  fill="var(--ink)"
                  style={{ fontStretch: '80%' }}
                >
                  {event.text}
                </text>
              </>
            ) : null}
          </g>
        );
      })}
    </svg>
  );
}
