import { In, type EntityManager } from 'typeorm';
import type { TrackFilter, TrackRecord } from '../../../shared/api/track-record.ts';
import { instantOfLocal } from '../../../shared/domain/shift-times.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { summariseSums, type ScoreSums } from '../../../shared/forecasting/score-sums.ts';
import { trackVerdict, type VerdictSubject } from '../../../shared/forecasting/track-verdict.ts';
import { leadInWords } from '../../../shared/domain/record-lead.ts';
import { readAreas, readShifts } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { Job } from '../../entities/Job.ts';
import type { Site } from '../../entities/Site.ts';
import { countOutlooks, countWeekOutlooks } from './count-outlooks.ts';
import { presentDriftOfModelInUse } from './present-drift.ts';
import { dimensions, matches, presentAcknowledged, presentParts } from './present-parts.ts';
import { readPoints } from './read-points.ts';
import { recomputeJobKind } from './recompute-record.job.ts';
import { byWeek, nearestLead, readLeads, readSums, type ReadSums } from './week-sums.ts';

const week = 7 * 86_400;
const ninety = 2;

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
  // Only what the page shows is parsed.
  const parsed: ReadSums[] = rows
    .filter((row) => dimensions.some((dimension) => matches(row, chosen, dimension)))
    .map((row) => ({ ...row, sums: JSON.parse(row.sums) as ScoreSums }));
  const here = parsed.filter((row) => matches(row, chosen, null));
  const open = here.filter((row) => row.acknowledged === 0);
  const weeks = byWeek(here);
  // The chances of acknowledged hours are told apart: what was done about them may have changed what came.
  const summary = withOpenChances(summariseSums([...weeks.values()]), summariseSums([...byWeek(open).values()]));
  const acknowledged = presentAcknowledged(here);
  const parts = presentParts(parsed, chosen, areas, models);
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
    acknowledged,
    verdict: trackVerdict(summary, subjectOf(chosen), verdictParts, acknowledged),
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

function withOpenChances(
  all: TrackRecord['summary'],
  open: Pick<TrackRecord['summary'], 'chances' | 'calledFor' | 'brier'>,
): TrackRecord['summary'] {
  return { ...all, chances: open.chances, calledFor: open.calledFor, brier: open.brier };
}

function presentWeek(number: number, from: number, sums: ScoreSums): TrackRecord['byWeek'][number] {
  const one = summariseSums([sums], 2, 'ranges');
  const ruleOf = ({ mase, pinball }: (typeof one.baselines)['year']) => ({ mase, pinball });
  const { lastWeek, fourWeeks, year } = one.baselines;
  return {
    week: number,
    from,
    n: one.n,
    mase: one.mase,
    floorMase: one.floorMase,
    pinball: one.pinball.value,
    floorPinball: one.floorPinball,
    baselines: { lastWeek: ruleOf(lastWeek), fourWeeks: ruleOf(fourWeeks), year: ruleOf(year) },
    coverage90: one.coverage[ninety].observed,
    expected90: one.coverage[ninety].expected,
  };
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
