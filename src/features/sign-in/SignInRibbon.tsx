import { Mark } from '../../components/Mark.tsx';

const heights = [46, 52, 60, 72, 88, 146, 128, 78, 60, 44, 36, 30, 26, 24];
const line = 100;
const hours = [17, 18, 19, 20, 21, 22, 23, 0, 1, 2, 3, 4, 5, 6];

/** The mark drawn large across a night's ribbon of hours. Decoration: no figure of any site stands here. */
export function SignInRibbon() {
  return (
    <div className="overflow-hidden">
      <div className="page-pad flex items-center gap-3 py-5">
        <Mark className="h-9 w-9" />
        <span className="text-section -tracking-[0.01em] [font-weight:850]">Shoalmark</span>
      </div>
      <svg
        aria-hidden="true"
        viewBox="0 0 560 214"
        preserveAspectRatio="xMinYMin slice"
        className="h-52 w-full min-w-[560px]"
      >
        <defs>
          <linearGradient id="sign-in-fade" x1="0" y1="0" x2="0" y2="1">
            <stop offset="0" stopColor="var(--water)" stopOpacity="0" />
            <stop offset="1" stopColor="var(--water)" />
          </linearGradient>
        </defs>
        {hours.map((hour, index) => {
          const sky = index === 0 ? 3 : 4;
          return (
            <g key={hour} transform={`translate(${String(index * 40)} 0)`}>
              <rect width={40.5} height={32} fill={`var(--sky${String(sky)})`} />
              <text x={9} y={21.5} fontSize={16} fontWeight={700} fill={`var(--sky${String(sky)}i)`}>
                {String(hour).padStart(2, '0')}
              </text>
            </g>
          );
        })}
        {heights.map((height, index) => (
          <g key={hours[index]} transform={`translate(${String(index * 40)} 0)`}>
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
        <rect x={284} y={212 - line - 4} width={276} height={4} fill="var(--ink)" />
        <rect y={150} width={560} height={64} fill="url(#sign-in-fade)" />
        <rect x={78.5} y={0} width={3} height={190} fill="var(--act)" />
      </svg>
    </div>
  );
}
