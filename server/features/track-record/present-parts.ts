import type { RecordPart, TrackFilter, TrackRecord } from '../../../shared/api/track-record.ts';
import { leadInWords } from '../../../shared/domain/record-lead.ts';
import { summariseSums } from '../../../shared/forecasting/score-sums.ts';
import { byWeek, type ReadSums, type SumRow } from './week-sums.ts';

/** What the record is taken apart by. */
export const dimensions = ['lead', 'area', 'shift', 'model'] as const;
type Dimension = (typeof dimensions)[number];

const ninety = 2;
/** The resampling of a part's error need not be as fine as that of the whole. */
const partResamples = 100;

/** Whether a row is of what a filter asks for, one part of it left open. */
export function matches(row: SumRow | ReadSums, filter: TrackFilter, open: Dimension | null): boolean {
  return (
    (open === 'lead' || row.leadHours === filter.lead) &&
    (open === 'area' || row.areaId === filter.area) &&
    (open === 'shift' || filter.shift === '' || row.shift === filter.shift) &&
    (open === 'model' || filter.model === '' || row.modelId === filter.model)
  );
}

interface Named {
  id: string;
  name: string;
}

/** The same figures by lead, area, shift and model, each with the rest of the filter as it is. */
export function presentParts(
  rows: readonly ReadSums[],
  filter: TrackFilter,
  areas: readonly Named[],
  models: readonly Named[],
): TrackRecord['parts'] {
  const known = new Map([...areas, ...models].map(({ id, name }) => [id, name]));
  const look: Record<Dimension, { keyOf: (row: ReadSums) => string; nameOf: (key: string) => string }> = {
    lead: {
      keyOf: ({ leadHours }) => String(leadHours),
      nameOf: (key) => leadInWords(filter.measure, Number(key)),
    },
    area: {
      keyOf: ({ areaId }) => areaId,
      nameOf: (key) => (key === '' ? 'Whole department' : (known.get(key) ?? 'An area taken away since')),
    },
    shift: { keyOf: ({ shift }) => shift, nameOf: (key) => (key === '' ? 'No shift in charge' : key) },
    model: { keyOf: ({ modelId }) => modelId, nameOf: (key) => known.get(key) ?? 'A model of before' },
  };
  const partsOf = (dimension: Dimension): RecordPart[] => {
    const { keyOf, nameOf } = look[dimension];
    return grouped(
      rows.filter((row) => matches(row, filter, dimension)),
      keyOf,
    )
      .map(([key, own]) => presentPart(key, nameOf(key), own))
      .sort((a, b) => (dimension === 'lead' ? Number(a.key) - Number(b.key) : a.name < b.name ? -1 : 1));
  };
  return { lead: partsOf('lead'), area: partsOf('area'), shift: partsOf('shift'), model: partsOf('model') };
}

/** Hours and shifts whose risk somebody acknowledged beside the others; empty where nobody did. */
export function presentAcknowledged(rows: readonly ReadSums[]): RecordPart[] {
  const apart = new Map(grouped(rows, ({ acknowledged }) => (acknowledged === 1 ? 'yes' : 'no')));
  const [seen, open] = [apart.get('yes'), apart.get('no')];
  if (!seen) return [];
  return [
    presentPart('yes', 'Acknowledged', seen),
    ...(open ? [presentPart('no', 'Not acknowledged', open)] : []),
    ...(open ? [presentPart('all', 'Both together', rows)] : []),
  ];
}

function grouped(rows: readonly ReadSums[], keyOf: (row: ReadSums) => string): [key: string, rows: ReadSums[]][] {
  const groups = new Map<string, ReadSums[]>();
  for (const row of rows) {
    const key = keyOf(row);
    const own = groups.get(key);
    if (own) own.push(row);
    else groups.set(key, [row]);
  }
  return [...groups.entries()];
}

function presentPart(key: string, name: string, rows: readonly ReadSums[]): RecordPart {
  const one = summariseSums([...byWeek(rows).values()], partResamples, 'ranges');
  const { observed, expected, se } = one.coverage[ninety];
  return {
    key,
    name,
    n: one.n,
    coverage90: observed,
    expected90: expected,
    se,
    mase: one.mase,
    floorMase: one.floorMase,
    meanChance: one.calledFor.meanChance,
    share: one.calledFor.share,
  };
}
