import type { ReactNode } from 'react';
import type { ComparedScale, ModelComparisonReply } from '../../../shared/api/arrival-models.ts';
import { differenceVerdict } from '../../../shared/forecasting/comparison-sentences.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { Notice, ProblemNotice } from '../../components/Notice.tsx';
import { formatDate, formatDateTime, formatNumber } from '../../lib/format.ts';
import { useCompare, useComparison } from './queries.ts';

type Result = NonNullable<ModelComparisonReply['result']>;
type Row = ComparedScale & { name: string };
type Side = ComparedScale['candidate'];

const levelNames = { hour: 'By hour', shift: 'By eight hours', day: 'By day', week: 'By week' };
const verdictWords = {
  better: 'Candidate better',
  worse: 'Candidate worse',
  alike: 'No telling',
  'too few': 'Too few weeks',
};
const figure = (value: number | null, decimals: number): string =>
  value === null ? '–' : formatNumber(value, decimals);

/** The backtest of a candidate side by side with the model in use: start it, watch it, read it. */
export function ModelComparison({
  siteId,
  modelId,
  timeZone,
  progressOf,
}: {
  siteId: string;
  modelId: string;
  timeZone: string;
  /** How far the job is, with its way to cancel. */
  progressOf: (jobId: string) => ReactNode;
}) {
  const query = useComparison(siteId, modelId);
  const starting = useCompare(siteId, modelId);
  if (query.error) {
    return <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />;
  }
  if (!query.data) return null;
  const { comparison, mayCompare } = query.data;
  if (!comparison && !mayCompare) return null;
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-3 border-t border-hair pt-4" aria-labelledby="comparison">
      <h2 id="comparison" className="text-section">
        Beside the model in use
      </h2>
      {comparison?.status === 'running' ? progressOf(comparison.jobId) : null}
      {comparison?.status === 'failed' ? (
        <Notice kind="caution" title={comparison.error ?? 'The comparison ended without a reason.'}>
          <p>
            Both models are as they were.{' '}
            {comparison.error === 'Cancelled.'
              ? 'You can try both again at any time.'
              : 'Try again once the cause is mended.'}
          </p>
        </Notice>
      ) : null}
      {comparison?.result ? (
        <Compared comparison={comparison} result={comparison.result} timeZone={timeZone} />
      ) : comparison ? null : (
        <p className="max-w-[46rem] text-ink2">
          Both can be tried on the last 13 weeks of your own visits: each forecasts every week from what it would have
          known before it, and is scored against what came.
        </p>
      )}
      {starting.error ? <ProblemNotice error={starting.error} /> : null}
      {mayCompare ? (
        <Button
          look={comparison?.result ? 'second' : 'main'}
          className="justify-self-start"
          busy={starting.isPending}
          busyText="Starting…"
          onClick={() => {
            starting.mutate();
          }}
        >
          {comparison ? 'Try both again' : 'Try both on past weeks'}
        </Button>
      ) : null}
    </section>
  );
}

function Compared({
  comparison,
  result,
  timeZone,
}: {
  comparison: ModelComparisonReply;
  result: Result;
  timeZone: string;
}) {
  const { words } = result;
  const arrivals: Row[] = result.arrivals.map((scale) => ({ ...scale, name: levelNames[scale.level] }));
  const need: Row[] = result.need.map((scale) => ({ ...scale, name: `${String(scale.leadHours)} h ahead` }));
  return (
    <>
      {comparison.stillInUse ? null : (
        <Notice kind="caution" title="Another model is in use now than the one compared here.">
          <p>Try both again before you approve.</p>
        </Notice>
      )}
      <p className="max-w-[46rem] font-bold text-ink">{words.headline}</p>
      <div className="grid max-w-[46rem] gap-2 text-ink2">
        <p>{words.arrivals}</p>
        <p>{words.need}</p>
        <p>{words.ranges}</p>
        <p>{words.grounds}</p>
      </div>
      <ScaleTable caption="Arrivals of the site" what="Arrivals" rows={arrivals} />
      {need.length === 0 ? null : <ScaleTable caption="Need of the whole department" what="Need" rows={need} />}
      <p className="max-w-[46rem] text-quiet text-ink2">
        {formatDate(result.from, timeZone)} to {formatDate(result.to - 1, timeZone)}, {formatNumber(result.weeks)}{' '}
        weeks; the one in use was fitted by {comparison.inUse.fittedBy}
        {comparison.inUse.fittedAt === null ? '' : `, ${formatDateTime(comparison.inUse.fittedAt, timeZone)}`}. Lower is
        better for the log score, the pinball loss and the scaled error (1 = the same time a week before). The ± after a
        difference is its standard error from resampling whole weeks; “simulation” is the part that{' '}
        {formatNumber(result.batches)} repeats with other random numbers leave ({formatNumber(result.draws)} draws,{' '}
        {formatNumber(result.replications)} replications each). Asked for by {comparison.askedBy},{' '}
        {formatDateTime(comparison.createdAt, timeZone)}. How past weeks went says nothing of a major incident.
      </p>
    </>
  );
}

function ScaleTable({ caption, what, rows }: { caption: string; what: string; rows: readonly Row[] }) {
  const pair = (key: string, header: string, of: (side: Side) => string) =>
    (['candidate', 'inUse'] as const).map((side) => ({
      key: `${key}-${side}`,
      header: `${header}, ${side === 'candidate' ? 'candidate' : 'in use'}`,
      figure: true,
      cell: (row: Row) => of(row[side]),
    }));
  return (
    <DataTable
      caption={caption}
      rows={rows}
      rowKey={(row) => row.name}
      columns={[
        { key: 'name', header: what, rowHeader: true, cell: (row) => row.name },
        {
          key: 'verdict',
          header: 'By log score',
          cell: (row) => <b>{verdictWords[differenceVerdict(row.difference?.logScore ?? null)]}</b>,
        },
        {
          key: 'difference',
          header: 'Difference (simulation)',
          figure: true,
          cell: (row) => <DifferenceCell row={row} />,
        },
        ...pair('log', 'Log score', ({ logScore }) => figure(logScore, 3)),
        ...pair('mase', 'Scaled error', ({ mase }) => figure(mase, 3)),
        ...pair('pinball', 'Pinball loss', ({ pinball }) => figure(pinball, 3)),
        ...pair('cover', 'Within 90\u00a0% (was to be)', (side) => {
          const ninety = side.coverage.find(({ level }) => level === 0.9);
          const percent = (share: number | null | undefined) =>
            figure(share === null || share === undefined ? null : 100 * share, 1);
          return `${percent(ninety?.observed)} (${percent(ninety?.expected)})`;
        }),
        { key: 'n', header: 'Cases', figure: true, cell: (row) => formatNumber(row.n) },
      ]}
    />
  );
}

function DifferenceCell({ row }: { row: Row }) {
  const found = row.difference?.logScore;
  if (!found) return <>–</>;
  const sign = found.value < 0 ? '−' : '+';
  return (
    <span className="whitespace-nowrap">
      {found.value === 0 ? '0' : `${sign}${formatNumber(Math.abs(found.value), 3)}`} ± {figure(found.se, 3)}{' '}
      <span className="text-ink2">({figure(found.monteCarlo, 4)})</span>
    </span>
  );
}
