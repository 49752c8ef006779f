import { formatChance, riskWord } from '../domain/risk-word.ts';
import type { Zone } from '../domain/zoned-time.ts';
import { localParts } from '../domain/zoned-time.ts';
import { staleCensusSeconds } from './outlook-sentence.ts';
import type { NeedByHour } from './outlook-types.ts';
import { printedShortfall } from './printed-shortfall.ts';

export interface SummaryOutlook {
  hours: readonly number[];
  areas: readonly (Pick<NeedByHour, 'shortfall' | 'shortfallWithin' | 'staffed'> & {
    areaId: string;
    counted: boolean;
    need: { p90: readonly number[] };
  })[];
}

export interface SummaryArea {
  areaId: string;
  name: string;
  spaceKind: 'bed' | 'chair';
  spaces: number;
  alertLimit: number;
  /** The count that the outlook was computed from; null if there was none. */
  census: { takenAt: number; present: number; waiting: number; boarding: number } | null;
}

export interface SummaryInput {
  result: SummaryOutlook;
  areas: readonly SummaryArea[];
  /** The shift that is handed over to. */
  shift: { name: string; from: number; to: number };
  /** What was done, in time order. */
  done: readonly { kind: 'census' | 'staffed beds' | 'acknowledgement'; at: number; by: string }[];
  now: number;
  zone: Zone;
}

interface Judged {
  area: SummaryArea;
  /** Hours of the shift past the limit, as indexes of the outlook's hours. */
  past: number[];
  peak: number;
  peakIndex: number;
  /** The hour at which P90 of need is furthest above staffed beds. */
  gapIndex: number;
  need: number;
  staffed: number;
}

const some = (count: number, one: string, many = `${one}s`) => `${String(count)} ${count === 1 ? one : many}`;

function list(items: readonly string[]): string {
  return items.length < 2 ? items.join('') : `${items.slice(0, -1).join(', ')} and ${items.at(-1) ?? ''}`;
}

/**
 * A handover in three to six sentences, to be said aloud: what is counted, which areas pass their limit in the
 * coming shift and how likely, the widest gap between need at P90 and staffed beds, what was done, and until
 * when it may be used. Every figure is the outlook's or the census's own; an area that was not counted is named
 * and nothing else is said of it.
 * Cost: linear in areas x hours.
 */
export function handoverSummary({ result, areas, shift, done, now, zone }: SummaryInput): string[] {
  const time = (at: number) => {
    const { hour, minute } = localParts(zone.toLocal(at));
    return `${String(hour).padStart(2, '0')}:${String(minute).padStart(2, '0')}`;
  };
  const shiftName = /shift/i.test(shift.name) ? shift.name : `${shift.name} shift`;
  const hours = result.hours.flatMap((at, index) => (at > now && at >= shift.from && at < shift.to ? [index] : []));
  const judged: Judged[] = [];
  const counts: NonNullable<SummaryArea['census']>[] = [];
  const uncounted: string[] = [];
  for (const area of areas) {
    const outlook = result.areas.find((candidate) => candidate.areaId === area.areaId);
    if (!outlook?.counted || !area.census) {
      uncounted.push(area.name);
      continue;
    }
    counts.push(area.census);
    if (hours.length > 0) judged.push(judge(area, outlook, hours));
  }
  const sayDone = doneInWords(done, time);
  if (counts.length === 0) {
    return ['No area has a census.', `Nothing can be said of the ${shiftName} until one is entered.`, sayDone];
  }

  const sum = (field: 'present' | 'waiting' | 'boarding') => counts.reduce((total, count) => total + count[field], 0);
  const taken = counts.map((count) => count.takenAt);
  const oldest = Math.min(...taken);
  const when =
    time(oldest) === time(Math.max(...taken))
      ? `at ${time(oldest)}`
      : `from ${time(oldest)} to ${time(Math.max(...taken))}`;
  const missing =
    uncounted.length > 0 ? `; ${list(uncounted)} ${uncounted.length === 1 ? 'is' : 'are'} not counted` : '';
  return [
    `Counted ${when}: ${String(sum('present'))} present, ${String(sum('waiting'))} waiting, ${String(sum('boarding'))} boarding${missing}.`,
    ...(judged.length > 0
      ? [...riskInWords(judged, hours.length, shiftName, result.hours, time), needInWords(judged, result.hours, time)]
      : [`This outlook holds no hour of the ${shiftName}.`]),
    sayDone,
    now > oldest + staleCensusSeconds
      ? 'The census is more than 4 hours old: enter a new one before you act.'
      : `Do not use after ${time(oldest + staleCensusSeconds)}.`,
  ];
}

function judge(area: SummaryArea, outlook: SummaryOutlook['areas'][number], hours: readonly number[]): Judged {
  const printed = printedShortfall(outlook, area.spaces);
  const peakIndex = hours.reduce((best, index) => (printed[index].chance > printed[best].chance ? index : best));
  const gapAt = (index: number) => outlook.need.p90[index] - outlook.staffed[index];
  const gapIndex = hours.reduce((best, index) => (gapAt(index) > gapAt(best) ? index : best));
  return {
    area,
    past: hours.filter((index) => printed[index].chance > area.alertLimit),
    peak: printed[peakIndex].chance,
    peakIndex,
    gapIndex,
    need: outlook.need.p90[gapIndex],
    staffed: outlook.staffed[gapIndex],
  };
}

function riskInWords(
  judged: readonly Judged[],
  hours: number,
  shiftName: string,
  at: readonly number[],
  time: (at: number) => string,
): string[] {
  const byPeak = [...judged].sort((a, b) => b.peak - a.peak);
  const past = byPeak.filter((one) => one.past.length > 0);
  const [worst] = past;
  if (!worst) {
    const [highest] = byPeak;
    return [
      `No counted area passes its limit in the ${shiftName}; the highest chance of a shortfall is ${formatChance(highest.peak)}, ` +
        `${riskWord(highest.peak).toLowerCase()}: ${highest.area.name} at ${time(at[highest.peakIndex])}.`,
    ];
  }
  const said = [
    `In the ${shiftName} ${worst.area.name} passes its ${String(Math.round(worst.area.alertLimit * 100))} % limit at ` +
      `${String(worst.past.length)} of ${some(hours, 'hour')}, first at ${time(at[worst.past[0]])}; its highest chance of a shortfall is ` +
      `${formatChance(worst.peak)}, ${riskWord(worst.peak).toLowerCase()}, at ${time(at[worst.peakIndex])}.`,
  ];
  const others = past
    .slice(1)
    .map((one) => `${one.area.name} (${formatChance(one.peak)} at ${time(at[one.peakIndex])})`);
  if (others.length > 0)
    said.push(`${list(others)} ${others.length === 1 ? 'passes its limit' : 'pass their limits'} too.`);
  return said;
}

function needInWords(judged: readonly Judged[], at: readonly number[], time: (at: number) => string): string {
  const widest = judged.reduce((found, one) => (one.need - one.staffed > found.need - found.staffed ? one : found));
  if (widest.need <= widest.staffed) return 'At P90 no counted area needs more than is staffed at any hour of it.';
  const { area, need, staffed, gapIndex } = widest;
  return `At P90 ${area.name} needs ${some(need, area.spaceKind)} at ${time(at[gapIndex])} and has ${String(staffed)} staffed.`;
}

function doneInWords(done: SummaryInput['done'], time: (at: number) => string): string {
  const last = done.at(-1);
  if (!last) return 'Nothing is noted as done so far.';
  const count = (kind: SummaryInput['done'][number]['kind']) => done.filter((entry) => entry.kind === kind).length;
  const parts = [
    [count('census'), 'census', 'censuses'],
    [count('staffed beds'), 'change of staffed beds', 'changes of staffed beds'],
    [count('acknowledgement'), 'acknowledgement', 'acknowledgements'],
  ] as const;
  const said = parts.flatMap(([number, one, many]) => (number > 0 ? [some(number, one, many)] : []));
  return `Done so far: ${list(said)}, the last at ${time(last.at)} by ${last.by}.`;
}
