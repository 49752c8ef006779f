import type { EntityManager } from 'typeorm';
import { intervalLevels } from '../../../shared/forecasting/scoring.ts';
import { ForecastScore } from '../../entities/ForecastScore.ts';
import type { LastWeekScores } from './brief-section.ts';

/** Of the forecasts that stand ready by the evening for the night: this far ahead, or as near to it as was scored. */
const wantedLead = 12;

/** How often need of the last week fell inside the 90 % range that was forecast for it; null while nothing is scored. */
export async function readLastWeekScores(
  read: EntityManager,
  siteId: string,
  { from, to }: { from: number; to: number },
): Promise<LastWeekScores | null> {
  const scored = await read
    .createQueryBuilder(ForecastScore, 'score')
    .select(['score.id', 'score.leadHours', 'score.observed', 'score.intervals', 'score.fromAt'])
    .where("score.siteId = :siteId AND score.measure = 'need' AND score.areaId = ''", { siteId })
    .andWhere('score.fromAt >= :from AND score.fromAt < :to AND score.intervals IS NOT NULL', { from, to })
    .orderBy('score.id', 'ASC')
    .getMany();
  const leads = [...new Set(scored.map(({ leadHours }) => leadHours))];
  if (leads.length === 0) return null;
  const leadHours = leads.reduce((best, lead) =>
    Math.abs(lead - wantedLead) < Math.abs(best - wantedLead) ? lead : best,
  );
  // An hour counts once, by the outlook issued last for it at this distance.
  const byHour = new Map(scored.filter((score) => score.leadHours === leadHours).map((score) => [score.fromAt, score]));
  let hours = 0;
  let inside = 0;
  let expected = 0;
  for (const { observed, intervals } of byHour.values()) {
    const stored = JSON.parse(intervals ?? '[]') as [low: number, high: number, mass: number | null][];
    const widest = stored.at(intervalLevels.indexOf(0.9));
    if (!widest) continue;
    const [low, high, mass] = widest;
    hours += 1;
    expected += mass ?? 0.9;
    if (observed >= low && observed <= high) inside += 1;
  }
  return hours === 0 ? null : { leadHours, hours, inside, expected: Math.round(expected) };
}
