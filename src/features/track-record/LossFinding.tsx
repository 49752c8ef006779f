import { useState } from 'react';
import { LossLines, lossSpan } from '../../../shared/charts/LossLines.tsx';
import type { TrackRecord } from '../../../shared/api/track-record.ts';
import { ChartReader } from '../../components/ChartReader.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { SelectField } from '../../components/Field.tsx';
import { formatDate, formatNumber } from '../../lib/format.ts';
import { figure, percent } from './figures.ts';
import { Finding, Measured } from './Measured.tsx';

type Week = TrackRecord['byWeek'][number];
type By = 'pinball' | 'mase';
const rules = { lastWeek: 'Same time last week', fourWeeks: 'Mean of four weeks', year: 'Mean of a year' } as const;
const names: Record<By, string> = {
  pinball: 'The whole range: pinball loss, patients',
  mase: 'Its middle: MASE, 1 = a week before',
};
const floorOf = (week: Week, by: By): number | null => (by === 'pinball' ? week.floorPinball : week.floorMase);

const lossColumn = (width: number, weeks: number) =>
  (lossSpan(width).right - lossSpan(width).left) / Math.max(1, weeks - 1);

/** Loss of the whole range, or error of its middle, by week beside rules of the past and the floor that chance leaves. */
export function LossFinding({ record, timeZone }: { record: TrackRecord; timeZone: string }) {
  const { byWeek, summary, verdict } = record;
  const [by, setBy] = useState<By>('pinball');
  const known = (Object.keys(rules) as (keyof typeof rules)[]).filter((rule) =>
    byWeek.some((week) => week.baselines[rule][by] !== null),
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
      choice={
        <SelectField
          label="Measured by"
          value={by}
          options={Object.entries(names).map(([value, label]) => ({ value, label }))}
          onChange={(event) => {
            setBy(event.target.value as By);
          }}
        />
      }
      drawing={
        <Measured height={240}>
          {(width) => (
            <>
              <ChartReader
                label={by === 'pinball' ? 'Loss by week' : 'Scaled error by week'}
                columnWidth={lossColumn(width, byWeek.length)}
                start={lossSpan(width).left - lossColumn(width, byWeek.length) / 2}
                first={byWeek.length - 1}
                readings={byWeek.map((week) => ({
                  name: `Week of ${formatDate(week.from, timeZone)}`,
                  text: [
                    `this product ${figure(week[by])}`,
                    `floor ${figure(floorOf(week, by))}`,
                    ...known.map((rule) => `${rules[rule].toLowerCase()} ${figure(week.baselines[rule][by])}`),
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
                      values: drawn.map((week) => week?.baselines[rule][by] ?? null),
                    })),
                    { name: 'Floor of chance', look: 'floor', values: drawn.map((week) => week && floorOf(week, by)) },
                    { name: 'This product', look: 'own', values: drawn.map((week) => week?.[by] ?? null) },
                  ]}
                />
              </ChartReader>
              {lossSpan(width).named ? null : (
                <p className="text-quiet text-ink2">
                  Heavy: this product. Dashed: floor of chance. Thin:{' '}
                  {known.map((rule) => rules[rule].toLowerCase()).join(', ')}.
                </p>
              )}
            </>
          )}
        </Measured>
      }
      table={
        <DataTable
          caption={
            by === 'pinball'
              ? `Pinball loss by week, in patients: mean of seven percentiles, lower is better. All weeks: ${figure(summary.pinball.value)}, floor ${figure(summary.floorPinball)}`
              : `Mean absolute scaled error (MASE) of the median by week: below 1 is nearer than the same time a week before. All weeks: ${figure(summary.mase)}, floor ${figure(summary.floorMase)}`
          }
          rows={[...byWeek].reverse()}
          rowKey={({ week }) => String(week)}
          columns={[
            { key: 'week', header: 'Week of', rowHeader: true, cell: ({ from }) => formatDate(from, timeZone) },
            { key: 'n', header: 'Scores', figure: true, cell: ({ n }) => formatNumber(n) },
            { key: 'own', header: 'This product', figure: true, cell: (week) => figure(week[by]) },
            { key: 'floor', header: 'Floor', figure: true, cell: (week) => figure(floorOf(week, by)) },
            ...known.map((rule) => ({
              key: rule,
              header: rules[rule],
              figure: true,
              cell: (week: Week) => figure(week.baselines[rule][by]),
            })),
            { key: 'held', header: '90\u00a0% range held', figure: true, cell: (week) => percent(week.coverage90) },
          ]}
        />
      }
    />
  );
}
