import type { EntityManager } from 'typeorm';
import type { RecordPart, TrackFilter, TrackRecord } from '../../../shared/api/track-record.ts';
import { instantOfLocal } from '../../../shared/domain/shift-times.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { addSums, emptySums, summariseSums, type ScoreSums } from '../../../shared/forecasting/score-sums.ts';
import { trackVerdict, type VerdictSubject } from '../../../shared/forecasting/track-verdict.ts';
import { leadInWords } from '../../../shared/domain/record-lead.ts';
import { readAreas, readShifts } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { Job } from '../../entities/Job.ts';
import type { Site } from '../../entities/Site.ts';
import { In } from 'typeorm';
import { countOutlooks, countWeekOutlooks } from './count-outlooks.ts';
import { presentDriftOfModelInUse } from './present-drift.ts';
import { readPoints } from './read-points.ts';
import { recomputeJobKind } from './recompute-record.job.ts';

const week = 7 * 86_400;
const ninety = 2;
/** The resampling of a part's error need not be as fine as that of the whole. */
const partResamples = 100;

interface SumRow {
  week: number;
  measure: TrackFilter['measure'];
  leadHours: number;
  areaId: string;
  shift: string;
  modelId: string;
  acknowledged: number;
  sums: string;
}

interface ReadSums extends Omit<SumRow, 'sums'> {
  sums: ScoreSums;
}

/** Everything that the page shows under a filter, from the weekly sums. Cost: one parsed row a week, lead, area and shift looked at. */
export async function presentRecord(
  deps: Dependencies,
  site: Site,
  filter: TrackFilter,
  now: number,
): Promise<TrackRecord> {
  const { read } = deps.database;
  const zone = makeZone(site.timeZone);
  const mondayOf = (number: number): number => instantOfLocal(zone, number * week - 3 * 86_400);
  const thisWeek = Math.floor((Math.floor(zone.toLocal(now) / 86_400) + 3) / 7);
  const areas = await readAreas(read, site.id);
  const shifts = (await readShifts(read, site.id)).map(({ name }) => name);
  const models = await readScoredModels(read, site.id);
  const leads = await readLeads(read, site.id, filter.measure);
  const lead = nearestLead(leads, filter);
  const chosen = { ...filter, lead };
  const rows = await readSums(read, site.id, chosen, thisWeek - filter.weeks);
  const matches = (row: SumRow | ReadSums, without: 'lead' | 'area' | 'shift' | 'model' | null): boolean =>
    (without === 'lead' || row.leadHours === lead) &&
    (without === 'area' || row.areaId === filter.area) &&
    (without === 'shift' || filter.shift === '' || row.shift === filter.shift) &&
    (without === 'model' || filter.model === '' || row.modelId === filter.model);
  const dimensions = ['lead', 'area', 'shift', 'model'] as const;
  // Only what the page shows is parsed.
  const parsed: ReadSums[] = rows
    .filter((row) => dimensions.some((dimension) => matches(row, dimension)))
    .map((row) => ({ ...row, sums: JSON.parse(row.sums) as ScoreSums }));
  const here = parsed.filter((row) => matches(row, null));
  const open = here.filter((row) => row.acknowledged === 0);
  const seen = here.filter((row) => row.acknowledged === 1);
  const weeks = byWeek(here);
  // The chances of acknowledged hours are told apart: what was done about them may have changed what came.
  const summary = withOpenChances(summariseSums([...weeks.values()]), summariseSums([...byWeek(open).values()]));
  const acknowledged = summariseSums([...byWeek(seen).values()], 2).calledFor;
  const nameOf = namesOf(filter.measure, areas, models);
  const parts = Object.fromEntries(
    dimensions.map((dimension) => [
      dimension,
      partsOf(
        parsed.filter((row) => matches(row, dimension)),
        dimension,
        nameOf,
      ),
    ]),
  ) as TrackRecord['parts'];
  const verdictParts = Object.values(parts)
    .filter((own) => own.length > 1)
    .flat();
  return {
    filter: { ...chosen },
    areas: areas.map(({ id, name }) => ({ id, name })),
    shifts,
    leads,
    models,
    outlooks: await countOutlooks(read, site.id),
    weekOutlooks: await countWeekOutlooks(read, site.id),
    summary,
    acknowledged: { n: acknowledged.n, meanChance: acknowledged.meanChance, share: acknowledged.share },
    verdict: trackVerdict(summary, subjectOf(chosen), verdictParts),
    byWeek: [...weeks.entries()]
      .sort(([a], [b]) => a - b)
      .map(([number, sums]) => presentWeek(number, mondayOf(number), sums)),
    parts,
    points: await readPoints(read, site.id, chosen, 90),
    drift: await presentDriftOfModelInUse(read, site),
    recomputing:
      (
        await read.findOne(Job, {
          where: { siteId: site.id, kind: recomputeJobKind, status: In(['queued', 'running']) },
          select: { id: true },
        })
      )?.id ?? null,
  };
}

/** Hours ahead at which a measure is scored, ascending. */
export async function readLeads(
  read: EntityManager,
  siteId: string,
  measure: TrackFilter['measure'],
): Promise<number[]> {
  const rows = await read.query<{ leadHours: number }[]>(
    'SELECT DISTINCT leadHours FROM score_week WHERE siteId = ? AND measure = ? ORDER BY leadHours',
    [siteId, measure],
  );
  return rows.map(({ leadHours }) => leadHours);
}

/** The lead that a filter means: its own, or where a measure other than need has none such, the nearest to the event. */
export function nearestLead(leads: readonly number[], { measure, lead }: TrackFilter): number {
  return measure === 'need' || leads.includes(lead) ? lead : (leads.at(0) ?? 0);
}

/** What some part of the page shows: at most one part of the filter is left open at a time. */
function readSums(
  read: EntityManager,
  siteId: string,
  { measure, area, lead }: TrackFilter,
  fromWeek: number,
): Promise<SumRow[]> {
  return read.query<SumRow[]>(
    `SELECT week, measure, leadHours, areaId, shift, modelId, acknowledged, sums FROM score_week
     WHERE siteId = ? AND week >= ? AND measure = ? AND (areaId = ? OR leadHours = ?)`,
    [siteId, fromWeek, measure, area, lead],
  );
}

function byWeek(rows: readonly ReadSums[]): Map<number, ScoreSums> {
  const weeks = new Map<number, ScoreSums>();
  for (const { week: number, sums } of rows) {
    const own = weeks.get(number) ?? emptySums();
    weeks.set(number, own);
    addSums(own, sums);
  }
  return weeks;
}

function withOpenChances(
  all: TrackRecord['summary'],
  open: Pick<TrackRecord['summary'], 'chances' | 'calledFor' | 'brier'>,
): TrackRecord['summary'] {
  return { ...all, chances: open.chances, calledFor: open.calledFor, brier: open.brier };
}

function presentWeek(number: number, from: number, sums: ScoreSums): TrackRecord['byWeek'][number] {
  const one = summariseSums([sums], 2, 'ranges');
  const { lastWeek, fourWeeks, year } = one.baselines;
  return {
    week: number,
    from,
    n: one.n,
    mase: one.mase,
    floorMase: one.floorMase,
    pinball: one.pinball.value,
    floorPinball: one.floorPinball,
    baselines: { lastWeek: lastWeek.pinball, fourWeeks: fourWeeks.pinball, year: year.pinball },
    coverage90: one.coverage[ninety].observed,
    expected90: one.coverage[ninety].expected,
  };
}

type Dimension = keyof TrackRecord['parts'];
type NameOf = (dimension: Dimension, key: string) => string;

function namesOf(
  measure: TrackFilter['measure'],
  areas: readonly { id: string; name: string }[],
  models: readonly { id: string; name: string }[],
): NameOf {
  const known = new Map([...areas, ...models].map(({ id, name }) => [id, name]));
  return (dimension, key) => {
    if (dimension === 'lead') return leadInWords(measure, Number(key));
    if (dimension === 'area') return key === '' ? 'Whole department' : (known.get(key) ?? 'An area taken away since');
    if (dimension === 'shift') return key === '' ? 'No shift in charge' : key;
    return known.get(key) ?? 'A model of before';
  };
}

function partsOf(rows: readonly ReadSums[], dimension: Dimension, nameOf: NameOf): RecordPart[] {
  const groups = new Map<string, ReadSums[]>();
  for (const row of rows) {
    const key =
      dimension === 'lead'
        ? String(row.leadHours)
        : dimension === 'area'
          ? row.areaId
          : dimension === 'shift'
            ? row.shift
            : row.modelId;
    const own = groups.get(key);
    if (own) own.push(row);
    else groups.set(key, [row]);
  }
  return [...groups.entries()]
    .map(([key, own]) => {
      const one = summariseSums([...byWeek(own).values()], partResamples, 'ranges');
      const { observed, expected, se } = one.coverage[ninety];
      return {
        key,
        name: nameOf(dimension, key),
        n: one.n,
        coverage90: observed,
        expected90: expected,
        se,
        mase: one.mase,
        floorMase: one.floorMase,
        meanChance: one.calledFor.meanChance,
        share: one.calledFor.share,
      };
    })
    .sort((a, b) => (dimension === 'lead' ? Number(a.key) - Number(b.key) : a.name < b.name ? -1 : 1));
}

function subjectOf({ measure, lead }: TrackFilter): VerdictSubject {
  const ahead = lead === 0 ? '' : ` ${leadInWords(measure, lead).toLowerCase()}`;
  if (measure === 'arrivals') return { many: `daily arrivals${ahead}`, chanceOf: null };
  if (measure === 'shift arrivals') return { many: `arrivals of a shift${ahead}`, chanceOf: null };
  if (measure === 'peak') return { many: `highest needs of a shift${ahead}`, chanceOf: 'shifts' };
  return { many: `needs${ahead}`, chanceOf: 'hours' };
}

/** Models that scored outlooks were issued with, newest first. */
async function readScoredModels(read: EntityManager, siteId: string): Promise<TrackRecord['models']> {
  const ids = await read.query<{ modelId: string }[]>('SELECT DISTINCT modelId FROM score_week WHERE siteId = ?', [
    siteId,
  ]);
  if (ids.length === 0) return [];
  const rows = await read.find(ArrivalModelRow, {
    where: { id: In(ids.map(({ modelId }) => modelId)) },
    order: { fittedAt: 'DESC' },
  });
  return rows.map(({ id, fittedBy, fittedAt }) => ({
    id,
    name: `${fittedBy}, ${new Date((fittedAt ?? 0) * 1000).toISOString().slice(0, 10)}`,
  }));
}
