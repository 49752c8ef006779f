import { CoverageRows } from '../../../shared/charts/CoverageRows.tsx';
import { LossLines, lossSpan } from '../../../shared/charts/LossLines.tsx';
import { PitBars } from '../../../shared/charts/PitBars.tsx';
import { ReliabilityDiagram, reliabilitySpan } from '../../../shared/charts/ReliabilityDiagram.tsx';
import type { TrackRecord } from '../../../shared/api/track-record.ts';
import { ChartReader } from '../../components/ChartReader.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { formatCount, formatDate, formatNumber } from '../../lib/format.ts';
import { figure, percent } from './figures.ts';
import { Finding, Measured } from './Measured.tsx';

/** Coverage, reliability, PIT and losses by week, each with its sentence. */
export function RecordFindings({ record, timeZone }: { record: TrackRecord; timeZone: string }) {
  const { summary, verdict } = record;
  const drawn = summary.coverage.flatMap(({ level, observed, expected, se }) =>
    observed === null ? [] : [{ level, observed, expected, se }],
  );
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-x-12 gap-y-10 lg:grid-cols-2">
      {drawn.length === 0 ? null : (
        <Finding
          title="Did the ranges hold?"
          sentence={verdict.coverage}
          drawing={<Measured height={206}>{(width) => <CoverageRows rows={drawn} width={width} />}</Measured>}
          table={
            <DataTable
              caption="Share of what came within each interval"
              captionHidden
              rows={drawn}
              rowKey={({ level }) => String(level)}
              columns={[
                { key: 'level', header: 'Interval', rowHeader: true, cell: ({ level }) => percent(level, 0) },
                { key: 'observed', header: 'Held', figure: true, cell: (row) => percent(row.observed) },
                { key: 'expected', header: 'Was to hold', figure: true, cell: (row) => percent(row.expected) },
                { key: 'se', header: 'Standard error', figure: true, cell: (row) => percent(row.se) },
              ]}
            />
          }
        />
      )}
      {summary.chances.length === 0 ? null : (
        <Finding
          title="Did shortfalls come as often as was said?"
          sentence={
            <>
              {verdict.chances}
              {record.acknowledged.n > 0
                ? ` Told apart: ${formatCount(record.acknowledged.n, 'acknowledged case', 'acknowledged cases')}, said ${percent(record.acknowledged.meanChance, 0)} on average, came in ${percent(record.acknowledged.share, 0)}.`
                : ''}
            </>
          }
          drawing={
            <Measured height={320}>{(width) => <ChanceReader points={summary.chances} width={width} />}</Measured>
          }
          table={
            <DataTable
              caption="Chance of shortfall said, and how often it came"
              captionHidden
              rows={summary.chances}
              rowKey={({ from }) => String(from)}
              columns={[
                {
                  key: 'bin',
                  header: 'Said',
                  rowHeader: true,
                  cell: ({ from, to }) => `${percent(from, 0)} to ${percent(to, 0)}`,
                },
                { key: 'n', header: 'Cases', figure: true, cell: ({ n }) => formatNumber(n) },
                { key: 'mean', header: 'Said on average', figure: true, cell: (row) => percent(row.meanChance) },
                { key: 'share', header: 'Came', figure: true, cell: (row) => percent(row.share) },
                { key: 'se', header: 'Standard error', figure: true, cell: (row) => percent(row.se) },
              ]}
            />
          }
        />
      )}
      {drawn.length === 0 ? null : <LossFinding record={record} timeZone={timeZone} />}
      {summary.pitN === 0 ? null : (
        <Finding
          title="Where in its range did what came fall?"
          sentence={verdict.pit}
          drawing={
            <Measured height={170}>
              {(width) => (
                <ChartReader
                  label="Share of forecasts by tenth of their range"
                  start={2}
                  columnWidth={(width - 4) / summary.pit.length}
                  readings={summary.pit.map((height, index) => ({
                    name: `${String(10 * index)} to ${String(10 * index + 10)}\u00a0% of the range`,
                    text: `${figure(height)} of what there should be`,
                  }))}
                >
                  <PitBars heights={summary.pit} width={width} />
                </ChartReader>
              )}
            </Measured>
          }
          table={
            <DataTable
              caption="Share of forecasts by tenth of their range (probability integral transform), 1 as there should be"
              rows={summary.pit.map((height, index) => ({ height, index }))}
              rowKey={({ index }) => String(index)}
              columns={[
                {
                  key: 'tenth',
                  header: 'Tenth',
                  rowHeader: true,
                  cell: ({ index }) => `${String(10 * index)} to ${String(10 * index + 10)}\u00a0%`,
                },
                { key: 'height', header: 'Height', figure: true, cell: ({ height }) => figure(height) },
              ]}
            />
          }
        />
      )}
    </div>
  );
}

const lossColumn = (width: number, weeks: number) =>
  (lossSpan(width).right - lossSpan(width).left) / Math.max(1, weeks - 1);

/** The diagram with its points read one by one; between two of them the nearer answers. */
function ChanceReader({ points, width }: { points: TrackRecord['summary']['chances']; width: number }) {
  const { left, right } = reliabilitySpan(width);
  const at = points.map(({ meanChance }) => left + meanChance * (right - left));
  const between = (index: number) => (index <= 0 ? left : index >= at.length ? right : (at[index - 1] + at[index]) / 2);
  return (
    <ChartReader
      label="Chance said, and how often it came"
      columnWidth={20}
      readings={points.map((point, index) => ({
        name: `Said ${percent(point.meanChance)}`,
        text: `came in ${percent(point.share)} of ${formatCount(point.n, 'case')}`,
        x: between(index),
        width: Math.max(4, between(index + 1) - between(index)),
      }))}
    >
      <ReliabilityDiagram points={points} width={width} />
    </ChartReader>
  );
}

function LossFinding({ record, timeZone }: { record: TrackRecord; timeZone: string }) {
  const { byWeek, summary, verdict } = record;
  const rules = { lastWeek: 'Same time last week', fourWeeks: 'Mean of four weeks', year: 'Mean of a year' } as const;
  const known = (Object.keys(rules) as (keyof typeof rules)[]).filter((rule) =>
    byWeek.some((week) => week.baselines[rule] !== null),
  );
  const every = Math.max(1, Math.ceil(byWeek.length / 5));
  // A week with few scores yet says little; the table has it.
  const most = Math.max(...byWeek.map(({ n }) => n));
  const drawn = byWeek.map((week) => (week.n * 3 < most ? null : week));
  return (
    <Finding
      title="How far off, week by week?"
      sentence={
        <>
          {verdict.accuracy}{' '}
          {record.filter.measure === 'arrivals'
            ? 'The dashed floor is what a forecast would lose that knew every rate exactly: visits still come by chance.'
            : 'The dashed floor is what a forecast would lose whose ranges were exactly right: chance alone.'}
        </>
      }
      drawing={
        <Measured height={240}>
          {(width) => (
            <ChartReader
              label="Loss by week"
              columnWidth={lossColumn(width, byWeek.length)}
              start={lossSpan(width).left - lossColumn(width, byWeek.length) / 2}
              first={byWeek.length - 1}
              readings={byWeek.map((week) => ({
                name: `Week of ${formatDate(week.from, timeZone)}`,
                text: [
                  `this product ${figure(week.pinball)}`,
                  `floor ${figure(week.floorPinball)}`,
                  ...known.map((rule) => `${rules[rule].toLowerCase()} ${figure(week.baselines[rule])}`),
                ].join('; '),
              }))}
            >
              <LossLines
                width={width}
                labels={byWeek.map((week, index) =>
                  index % every === 0 ? formatDate(week.from, timeZone).replace(/ \d+$/, '') : '',
                )}
                lines={[
                  ...known.map((rule) => ({
                    name: rules[rule],
                    look: 'other' as const,
                    values: drawn.map((week) => week?.baselines[rule] ?? null),
                  })),
                  { name: 'Floor of chance', look: 'floor', values: drawn.map((week) => week?.floorPinball ?? null) },
                  { name: 'This product', look: 'own', values: drawn.map((week) => week?.pinball ?? null) },
                ]}
              />
            </ChartReader>
          )}
        </Measured>
      }
      table={
        <DataTable
          caption={`Pinball loss by week, in patients: mean of seven percentiles, lower is better. All weeks: ${figure(summary.pinball.value)}; MASE ${figure(summary.mase)}, floor ${figure(summary.floorMase)}`}
          rows={[...byWeek].reverse()}
          rowKey={({ week }) => String(week)}
          columns={[
            { key: 'week', header: 'Week of', rowHeader: true, cell: ({ from }) => formatDate(from, timeZone) },
            { key: 'n', header: 'Scores', figure: true, cell: ({ n }) => formatNumber(n) },
            { key: 'own', header: 'This product', figure: true, cell: (week) => figure(week.pinball) },
            { key: 'floor', header: 'Floor', figure: true, cell: (week) => figure(week.floorPinball) },
            ...known.map((rule) => ({
              key: rule,
              header: rules[rule],
              figure: true,
              cell: (week: TrackRecord['byWeek'][number]) => figure(week.baselines[rule]),
            })),
            { key: 'mase', header: 'MASE', figure: true, cell: (week) => figure(week.mase) },
            { key: 'held', header: '90\u00a0% range held', figure: true, cell: (week) => percent(week.coverage90) },
          ]}
        />
      }
    />
  );
}
