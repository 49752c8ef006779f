import { localParts, type Zone } from '../domain/zoned-time.ts';
import { countInWords } from './remedy-sentence.ts';
import { mayStillBook, weekGaps, type WeekGap } from './week-gaps.ts';
import type { WeekOutlookResult } from './week-outlook-types.ts';

export interface WeekSentenceArea {
  areaId: string;
  name: string;
  spaceKind: 'bed' | 'chair';
}

export interface WeekSentence {
  /** What can be repeated aloud. */
  headline: string;
  /** What stands beside it; texts follow each other with their own spaces. */
  lede: { text: string; strong: boolean }[];
  /** The area that the headline speaks of; null where no plan falls short. */
  worstAreaId: string | null;
}

const weekdays = ['Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday'];
const months = 'Jan Feb Mar Apr May Jun Jul Aug Sep Oct Nov Dec'.split(' ');

/** A risk as it is spoken: "1 in 10" where it is one, else a percentage. */
export function riskInWords(risk: number): string {
  const one = 1 / risk;
  return Math.abs(one - Math.round(one)) < 1e-6
    ? `1 in ${String(Math.round(one))}`
    : `${String(Math.round(risk * 100))} %`;
}

/**
 * The days ahead as one sentence: the worst gap between need and plan that can still be booked, by when, and the next
 * ones. Every figure is the outlook's. A gap whose last chance to book has passed is said to be past booking; without a
 * gap the sentence says what the plan holds for, and nothing of fewer beds.
 * @param days how many days the page shows, for the words; @param until their end, UTC seconds
 */
export function weekSentence(input: {
  result: Pick<WeekOutlookResult, 'shifts' | 'areas' | 'planningRisk'>;
  areas: readonly WeekSentenceArea[];
  now: number;
  until: number;
  days: number;
  zone: Zone;
}): WeekSentence {
  const { result, areas, now, until, days, zone } = input;
  const risk = riskInWords(result.planningRisk);
  const gaps = weekGaps(result, now, until).filter(({ areaId }) => areas.some((area) => area.areaId === areaId));
  const nameOf = (gap: WeekGap): WeekSentenceArea =>
    areas.find(({ areaId }) => areaId === gap.areaId) ?? { areaId: gap.areaId, name: '', spaceKind: 'bed' };
  const parts = (at: number) => localParts(zone.toLocal(at));
  const shiftName = ({ shift }: WeekGap): string => {
    const { weekday, day, month } = parts(shift.from);
    const far = shift.from - now > 6 * 86_400;
    return `${weekdays[weekday - 1]}${far ? ` ${String(day)} ${months[month - 1]}` : ''} ${shift.name}`;
  };
  const clock = (at: number): string => {
    const { weekday, hour, minute, day, month } = parts(at);
    const time = `${String(hour).padStart(2, '0')}:${String(minute).padStart(2, '0')}`;
    return `${weekdays[weekday - 1].slice(0, 3)} ${String(day)} ${months[month - 1]}, ${time}`;
  };
  const unit = (gap: WeekGap): string =>
    `${nameOf(gap).name} ${nameOf(gap).spaceKind}${gap.need.bedsToAdd === 1 ? '' : 's'}`;

  const say: WeekSentence['lede'] = [];
  if (gaps.length === 0) {
    say.push({
      text: `At a ${risk} risk of any shortfall in a shift, no area needs more than is planned.`,
      strong: false,
    });
    return {
      headline: `The plan holds for the next ${countInWords(days)} days.`,
      lede: say,
      worstAreaId: null,
    };
  }
  const open = gaps.filter((gap) => mayStillBook(gap, now));
  const worst = open.at(0) ?? gaps[0];
  const more = (gap: WeekGap): string => countInWords(gap.need.bedsToAdd);
  if (open.length === 0) {
    return {
      headline: `${shiftName(worst)} is short of ${more(worst)} ${unit(worst)}, and the last chance to book has passed.`,
      lede: [{ text: `At a ${risk} risk. See what can be moved, lent or left by other means.`, strong: false }],
      worstAreaId: worst.areaId,
    };
  }
  say.push({ text: `Book by ${clock(worst.need.lastChanceAt)}. `, strong: true });
  const next = open
    .filter((gap) => gap.shift.from !== worst.shift.from || gap.areaId !== worst.areaId)
    .slice(0, 2)
    .map((gap) =>
      gap.areaId === worst.areaId
        ? `${shiftName(gap)} ${more(gap)} more`
        : `${shiftName(gap)} ${more(gap)} more in ${nameOf(gap).name}`,
    );
  if (next.length > 0)
    say.push({ text: `At a ${risk} risk it needs them, and ${next.join(' and ')}. `, strong: false });
  else
    say.push({ text: `At a ${risk} risk it needs them; no other shift needs more than is planned. `, strong: false });
  const { bedsThatDoNotExist: missing } = worst.need;
  if (missing > 0) {
    const space = nameOf(worst).spaceKind === 'chair' ? 'chairs' : 'bed spaces';
    say.push({
      text: `For ${countInWords(missing)} of the ${more(worst)} no ${space} exist: beds alone will not do. `,
      strong: true,
    });
  }
  const passed = gaps.length - open.length;
  if (passed > 0) {
    say.push({
      text: `For ${countInWords(passed)} further ${passed === 1 ? 'gap' : 'gaps'} the last chance to book has passed.`,
      strong: false,
    });
  }
  return {
    headline: `${shiftName(worst)} needs ${more(worst)} more ${unit(worst)}.`,
    lede: say,
    worstAreaId: worst.areaId,
  };
}
