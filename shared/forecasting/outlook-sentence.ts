import { formatChance, riskStep, riskWord } from '../domain/risk-word.ts';
import type { Zone } from '../domain/zoned-time.ts';
import { localParts } from '../domain/zoned-time.ts';
import type { AreaOutlook, OutlookResult, ShiftRisk } from './outlook-types.ts';
import { countInWords, sayRemedy } from './remedy-sentence.ts';
import type { RemedyFigures, SentenceArea } from './remedy-sentence.ts';
import { printedShortfall } from './printed-shortfall.ts';
import { hoursOfTonight } from './tonight-span.ts';

/** Past this age the census itself is what the sentence is about, seconds. */
export const staleCensusSeconds = 4 * 3600;

/** What the sentence reads of an outlook's area. */
export interface SentenceFigures
  extends RemedyFigures, Pick<AreaOutlook, 'areaId' | 'counted' | 'shortfall' | 'shortfallWithin'> {
  shifts: readonly Pick<ShiftRisk, 'from' | 'to'>[];
}

export interface SentenceOutlook extends Pick<OutlookResult, 'hours'> {
  areas: readonly SentenceFigures[];
}

export interface SentencePart {
  text: string;
  strong: boolean;
}

export interface OutlookSentence {
  /** What a tired person can repeat aloud. */
  headline: string;
  /** What would remove the risk, and what else must be known; texts follow each other with their own spaces. */
  lede: SentencePart[];
  /** The area the headline speaks of: the worst past its limit; null if none is. */
  worstAreaId: string | null;
}

const weekdays = ['Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday'];

function list(items: readonly string[]): string {
  return items.length < 2 ? items.join('') : `${items.slice(0, -1).join(', ')} and ${items.at(-1) ?? ''}`;
}

function ageInWords(seconds: number): string {
  const minutes = Math.floor(seconds / 60);
  const rest = minutes % 60;
  const hours = Math.floor(minutes / 60);
  return rest === 0 ? `${String(hours)} hours` : `${String(hours)} h ${String(rest)} min`;
}

interface Judged {
  area: SentenceArea;
  outlook: SentenceFigures;
  /** Printed chance of each hour of tonight. */
  chances: number[];
  /** Indexes of tonight's hours past the area's limit. */
  past: number[];
  peak: number;
  peakIndex: number;
}

/**
 * The outlook as one sentence and what follows from it. Words never say more than the figures: each
 * word of risk is the word of a printed chance, each hour, bed and percentage is one of the
 * outlook's own, and an area that was not counted is named as such and never called calm. Speaks of
 * the hours until the end of the coming night; later hours past a limit are named with their day.
 * A census older than four hours, or none, takes the headline.
 *
 * @param now UTC seconds; hours at or before it are left out.
 * Cost: linear in areas x hours.
 */
export function outlookSentence(input: {
  result: SentenceOutlook;
  areas: readonly SentenceArea[];
  now: number;
  zone: Zone;
}): OutlookSentence {
  const { result, areas, now, zone } = input;
  const time = (at: number) => {
    const { hour, minute } = localParts(zone.toLocal(at));
    return `${String(hour).padStart(2, '0')}:${String(minute).padStart(2, '0')}`;
  };
  const percent = (share: number) => `${String(Math.round(share * 100))} %`;
  const window = hoursOfTonight(result, now, zone);
  const outlookOf = new Map(result.areas.map((area) => [area.areaId, area]));

  const judged: Judged[] = [];
  const uncounted: SentenceArea[] = [];
  for (const area of areas) {
    const outlook = outlookOf.get(area.areaId);
    if (!outlook?.counted || area.censusTakenAt === null) {
      uncounted.push(area);
      continue;
    }
    const printed = printedShortfall(outlook, area.spaces);
    const chances = window.map((index) => printed[index]?.chance ?? 0);
    const past = window.filter((_, place) => chances[place] > area.alertLimit);
    const peak = Math.max(0, ...chances);
    judged.push({ area, outlook, chances, past, peak, peakIndex: window[chances.indexOf(peak)] ?? -1 });
  }

  if (window.length === 0) {
    return {
      headline: 'This outlook has run out.',
      lede: [{ text: 'Enter a census: a new outlook is computed from it at once.', strong: true }],
      worstAreaId: null,
    };
  }
  if (judged.length === 0) {
    return {
      headline: 'No area has a census. Enter one before you act.',
      lede: [
        {
          text: 'Until then the drawing shows what the model expects on such a night, and nothing is counted.',
          strong: false,
        },
      ],
      worstAreaId: null,
    };
  }

  const past = judged.filter((one) => one.past.length > 0);
  const worst = past.reduce<Judged | null>((found, one) => (found && found.peak >= one.peak ? found : one), null);
  const lede: SentencePart[] = [];
  const say = (text: string, strong = false) =>
    lede.push({ text: lede.length > 0 && !/^[,.]/.test(text) ? ` ${text}` : text, strong });
  const lastHour = time(result.hours[window.at(-1) ?? 0]);

  let headline: string;
  if (worst) {
    headline = headlineOf(worst, window, result.hours, time);
    sayRemedy(worst, result.hours, time, say, percent);
    const others = past.filter((one) => one !== worst);
    if (others.length > 0) {
      const named = others.map(
        (one) => `${one.area.name} (${formatChance(one.peak)} at ${time(result.hours[one.peakIndex])})`,
      );
      say(`${list(named)} ${others.length === 1 ? 'passes its limit' : 'pass their limits'} too.`);
    }
  } else {
    headline = `No ${uncounted.length > 0 ? 'counted ' : ''}area passes its limit up to ${lastHour}.`;
    const highest = judged.reduce((found, one) => (found.peak >= one.peak ? found : one));
    say(
      `The highest chance of a shortfall is ${formatChance(highest.peak)}, ${riskWord(highest.peak).toLowerCase()}: ` +
        `${highest.area.name} at ${time(result.hours[highest.peakIndex])}.`,
    );
    sayLater(judged, result, window, time, zone, say);
  }

  if (uncounted.length > 0) {
    say(`${list(uncounted.map((area) => area.name))} ${uncounted.length === 1 ? 'is' : 'are'} not counted.`, true);
  }

  const stale = judged.filter((one) => now - (one.area.censusTakenAt ?? now) > staleCensusSeconds);
  if (stale.length > 0) {
    lede.unshift({ text: `${headline} `, strong: false });
    headline = staleHeadline(stale, judged.length, now);
  }
  return { headline, lede, worstAreaId: worst?.area.areaId ?? null };
}

/** The headline takes the word of the worst printed hour, and the first hour that carries it. */
function headlineOf(
  worst: Judged,
  window: readonly number[],
  hours: readonly number[],
  time: (at: number) => string,
): string {
  const { area, chances } = worst;
  const step = riskStep(worst.peak);
  const start = chances.findIndex((chance) => riskStep(chance) === step);
  const lasts = start + 1 < chances.length && riskStep(chances[start + 1]) === step;
  const when = `${lasts ? 'from' : 'at'} ${time(hours[window[start]])}`;
  const firstPast = `from ${time(hours[worst.past[0]])}`;
  if (step === 5) return `${area.name} is very likely to run short ${when}.`;
  if (step === 4) return `${area.name} is likely to run short ${when}.`;
  if (step === 3) return `A shortfall in ${area.name} is possible ${when}.`;
  if (step === 2) return `${area.name} is unlikely to run short, yet passes its limit ${firstPast}.`;
  return `The chance of a shortfall in ${area.name} is remote, yet passes its limit ${firstPast}.`;
}

/** With a quiet night, the first later hour past a limit is named with its day. */
function sayLater(
  judged: readonly Judged[],
  result: SentenceOutlook,
  window: readonly number[],
  time: (at: number) => string,
  zone: Zone,
  say: (text: string, strong?: boolean) => void,
): void {
  const after = (window.at(-1) ?? -1) + 1;
  const later = judged.flatMap((one) => {
    const printed = printedShortfall(one.outlook, one.area.spaces);
    const index = printed.findIndex((cell, place) => place >= after && cell.chance > one.area.alertLimit);
    return index < 0 ? [] : [{ one, index, chance: printed[index].chance }];
  });
  const next = later.reduce<(typeof later)[number] | null>(
    (found, at) => (found && found.index <= at.index ? found : at),
    null,
  );
  if (!next) return;
  const at = result.hours[next.index];
  const day = weekdays[localParts(zone.toLocal(at)).weekday - 1];
  say(`After that, ${next.one.area.name} passes its limit at ${time(at)} on ${day} (${formatChance(next.chance)}).`);
}

function staleHeadline(stale: readonly Judged[], counted: number, now: number): string {
  const oldest = Math.max(...stale.map((one) => now - (one.area.censusTakenAt ?? now)));
  if (stale.length === 1 && counted > 1) {
    return `The census of ${stale[0].area.name} is ${ageInWords(oldest)} old. Enter it before you act.`;
  }
  if (stale.length === counted) return `The census is ${ageInWords(oldest)} old. Enter it before you act.`;
  return `The census of ${countInWords(stale.length)} areas is up to ${ageInWords(oldest)} old. Enter it before you act.`;
}
