import type { RecordPart } from '../../../shared/api/track-record.ts';
import type { Column } from '../../components/DataTable.tsx';
import { formatNumber } from '../../lib/format.ts';
import { figure, percent } from './figures.ts';

/** What is told of every part of the record, after its name. */
export const partColumns: Column<RecordPart>[] = [
  { key: 'n', header: 'Scores', figure: true, cell: ({ n }) => formatNumber(n) },
  {
    key: 'held',
    header: '90\u00a0% range held',
    figure: true,
    cell: (part) => (
      <span className="whitespace-nowrap">
        <b>{percent(part.coverage90)}</b> <span className="text-ink2">of {percent(part.expected90)}</span>
      </span>
    ),
  },
  {
    key: 'mase',
    header: 'MASE (floor)',
    figure: true,
    cell: (part) => (
      <span className="whitespace-nowrap">
        {figure(part.mase)} <span className="text-ink2">({figure(part.floorMase)})</span>
      </span>
    ),
  },
  {
    key: 'chance',
    header: 'Shortfall said, came',
    figure: true,
    cell: (part) => (part.meanChance === null ? '–' : `${percent(part.meanChance, 0)}, ${percent(part.share, 0)}`),
  },
];
