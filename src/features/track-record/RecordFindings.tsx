import { CoverageRows } from '../../../shared/charts/CoverageRows.tsx';
import { PitBars } from '../../../shared/charts/PitBars.tsx';
import { ReliabilityDiagram, reliabilitySpan } from '../../../shared/charts/ReliabilityDiagram.tsx';
import type { TrackRecord } from '../../../shared/api/track-record.ts';
import { ChartReader } from '../../components/ChartReader.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { formatCount, formatNumber } from '../../lib/format.ts';
import { figure, percent } from './figures.ts';
import { LossFinding } from './LossFinding.tsx';
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
          sentence={verdict.chances}
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
