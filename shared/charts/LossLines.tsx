import { Group } from '@visx/group';
import { scaleLinear } from '@visx/scale';
import { LinePath } from '@visx/shape';
import { halo, labelStyle } from './label-look.ts';

export interface LossLine {
  name: string;
  look: 'own' | 'floor' | 'other';
  /** One figure a week, null where there is none. */
  values: readonly (number | null)[];
}

const looks = {
  own: { stroke: 'var(--ink)', strokeWidth: 3 },
  floor: { stroke: 'var(--act)', strokeWidth: 2, strokeDasharray: '6 4' },
  other: { stroke: 'var(--edge)', strokeWidth: 1.5 },
} as const;

const height = 240;
const pad = { left: 40, right: 8, top: 12, bottom: 26 };
/** Room for the names at the lines' ends. */
const nameRoom = 150;

/** Between which places, px, the weeks of a drawing of this width lie; names of the lines follow where there is room. */
export function lossSpan(width: number): { left: number; right: number; named: boolean } {
  const named = width > 520;
  return { left: pad.left, right: width - pad.right - (named ? nameRoom : 0), named };
}

/** Losses by week, each line named at its end; lower is better. Decoration: a table says the same. */
export function LossLines({
  lines,
  labels,
  width,
}: {
  lines: readonly LossLine[];
  /** What stands under a week; empty for none. */
  labels: readonly string[];
  width: number;
}) {
  const { left, right, named } = lossSpan(width);
  const values = lines.flatMap((line) => line.values.filter((value): value is number => value !== null));
  const high = Math.max(1e-6, ...values) * 1.08;
  const x = scaleLinear<number>({ domain: [0, Math.max(1, labels.length - 1)], range: [left, right] });
  const y = scaleLinear<number>({ domain: [0, high], range: [height - pad.bottom, pad.top] });
  const places = spread(
    lines.map((line) => y(line.values.findLast((value) => value !== null) ?? 0)),
    17,
    pad.top,
    height - pad.bottom,
  );
  return (
    <svg width={width} height={height} viewBox={`0 0 ${String(width)} ${String(height)}`} aria-hidden="true">
      {y.ticks(4).map((tick) => (
        <Group key={tick}>
          <line x1={pad.left} x2={right} y1={y(tick)} y2={y(tick)} stroke="var(--hair)" />
          <text x={pad.left - 6} y={y(tick) + 4} textAnchor="end" fontSize={13} fill="var(--ink2)" style={labelStyle}>
            {String(tick)}
          </text>
        </Group>
      ))}
      {labels.map((label, index) =>
        label === '' ? null : (
          <text key={label} x={x(index)} y={height - 6} fontSize={13} fill="var(--ink2)" style={labelStyle}>
            {label}
          </text>
        ),
      )}
      {lines.map((line, index) => (
        <Group key={line.name}>
          <LinePath
            data={line.values.map((value, week) => ({ value, week }))}
            defined={({ value }) => value !== null}
            x={({ week }) => x(week)}
            y={({ value }) => y(value ?? 0)}
            {...looks[line.look]}
          />
          {named ? (
            <text
              x={right + 8}
              y={places[index] + 4}
              fontSize={13}
              fontWeight={line.look === 'own' ? 850 : 650}
              fill={line.look === 'other' ? 'var(--ink2)' : 'var(--ink)'}
              style={labelStyle}
              {...halo}
            >
              {line.name}
            </text>
          ) : null}
        </Group>
      ))}
    </svg>
  );
}

/** Places moved apart so that none lies nearer to another than `gap`. */
function spread(places: readonly number[], gap: number, top: number, bottom: number): number[] {
  const order = places.map((at, index) => ({ at, index })).sort((a, b) => a.at - b.at);
  const moved = [...places];
  let last = top - gap;
  order.forEach(({ at, index }, place) => {
    const room = bottom - (order.length - 1 - place) * gap;
    moved[index] = Math.min(room, Math.max(at, last + gap));
    last = moved[index];
  });
  return moved;
}
