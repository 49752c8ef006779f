import { Mark } from '../../components/Mark.tsx';

/** The first night, 17:00 on, where the sand breaks the surface; then how a day's hours usually go, from 07:00. */
const firstNight = [46, 52, 60, 72, 88, 146, 128, 78, 60, 44, 36, 30, 26, 24];
const ordinaryDay = [24, 30, 40, 52, 62, 68, 70, 72, 70, 68, 66, 68, 70, 72, 76, 74, 66, 56, 46, 38, 32, 28, 25, 23];
const line = 100;
const columns = Array.from({ length: 72 }, (_, index) => ({
  hour: (17 + index) % 24,
  height: index < firstNight.length ? firstNight[index] : ordinaryDay[(index - firstNight.length) % 24],
}));
const width = columns.length * 40;

const skyOf = (hour: number) =>
  hour >= 9 && hour < 16 ? 1 : hour === 8 || hour === 16 ? 2 : hour === 7 || hour === 17 ? 3 : 4;

/** The mark drawn large across a night's ribbon of hours. Decoration: no figure of any site stands here. */
export function SignInRibbon() {
  return (
    <div className="overflow-hidden">
      <div className="page-pad flex items-center gap-3 py-5">
        <Mark className="h-9 w-9" />
        <span className="text-section -tracking-[0.01em] [font-weight:850]">Shoalmark</span>
      </div>
      <svg aria-hidden="true" width={width} height={214} viewBox={`0 0 ${String(width)} 214`} className="max-w-none">
        <defs>
          <linearGradient id="sign-in-fade" x1="0" y1="0" x2="0" y2="1">
            <stop offset="0" stopColor="var(--water)" stopOpacity="0" />
            <stop offset="1" stopColor="var(--water)" />
          </linearGradient>
        </defs>
        {columns.map(({ hour }, index) => {
          const sky = skyOf(hour);
          return (
            <g key={index} transform={`translate(${String(index * 40)} 0)`}>
              <rect width={40.5} height={32} fill={`var(--sky${String(sky)})`} />
              <text x={9} y={21.5} fontSize={16} fontWeight={700} fill={`var(--sky${String(sky)}i)`}>
                {String(hour).padStart(2, '0')}
              </text>
            </g>
          );
        })}
        {columns.map(({ height }, index) => (
          <g key={index} transform={`translate(${String(index * 40)} 0)`}>
            <rect
              y={212 - Math.min(height, line)}
              width={39}
              height={Math.min(height, line)}
              fill={index < 2 ? 'var(--g1)' : 'var(--g2)'}
            />
            {height > line ? <rect y={212 - height} width={39} height={height - line} fill="var(--r4)" /> : null}
          </g>
        ))}
        <rect x={0} y={212 - line - 4} width={195} height={4} fill="var(--ink)" />
        <rect x={284} y={212 - line - 4} width={width - 284} height={4} fill="var(--ink)" />
        <rect y={150} width={width} height={64} fill="url(#sign-in-fade)" />
        <rect x={78.5} y={0} width={3} height={190} fill="var(--act)" />
      </svg>
    </div>
  );
}
