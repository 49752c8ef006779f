import { formatChance, riskWord } from '../../../shared/domain/risk-word.ts';
import { suppressAverage, suppressSmall } from '../../../shared/domain/suppress-small.ts';
import { dispositionCode } from '../../../shared/domain/disposition.ts';
import { localParts, makeZone, type Zone } from '../../../shared/domain/zoned-time.ts';
import { meanOfWeeks, type WeekFacts } from '../../../shared/forecasting/weeks-in-hindsight.ts';
import type { SectionFacts, ShiftRisk } from './brief-section.ts';

const weekdays = ['Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday'];
const months = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec'];
const numerals = ['No', 'One', 'Two', 'Three', 'Four', 'Five', 'Six', 'Seven', 'Eight', 'Nine'];
/** From here on a chance is called likely; always half and more. */
const likely = 0.5;
/** A mean over the year wants this many weeks. */
const weeksOfAYear = 26;

/** Ways of writing a site's times and figures. */
export interface Writing {
  weekday(at: number): string;
  /** "2 Dec". */
  date(at: number): string;
  /** "Thu 3 Dec, 12:00". */
  moment(at: number): string;
}

export function writingOf(zone: Zone): Writing {
  const parts = (at: number) => localParts(zone.toLocal(at));
  const two = (value: number) => String(value).padStart(2, '0');
  const date = (at: number) => `${String(parts(at).day)} ${months[parts(at).month - 1]}`;
  const weekday = (at: number) => weekdays[parts(at).weekday - 1];
  return {
    weekday,
    date,
    moment: (at) => `${weekday(at).slice(0, 3)} ${date(at)}, ${two(parts(at).hour)}:${two(parts(at).minute)}`,
  };
}

/** Whole number with separators. */
export function number(value: number): string {
  return String(Math.round(value)).replace(/\B(?=(\d{3})+$)/g, ',');
}

export function counted(value: number, one: string, many = `${one}s`): string {
  return `${number(value)} ${Math.round(value) === 1 ? one : many}`;
}

const nameOf = (section: SectionFacts, areaId: string) =>
  section.areas.find(({ id }) => id === areaId)?.name ?? 'An area';

/** The answer as a sentence: how the next week stands. */
export function sayHeadline(section: SectionFacts): string {
  const shifts = section.outlook?.shifts;
  if (section.refusal !== null) return 'Nothing can be forecast: no arrival model is in use.';
  if (!shifts) return 'What next week needs is not known: it has not been computed.';
  const bad = shifts.filter(({ chance }) => chance >= likely);
  const times = new Set(bad.map(({ from }) => from)).size;
  if (times > 0) {
    const areas = [...new Set(bad.map(({ areaId }) => areaId))];
    const most = areas.reduce((best, id) => (howMany(bad, id) > howMany(bad, best) ? id : best));
    const where = areas.length === 1 ? ` in ${nameOf(section, most)}` : `, most of them in ${nameOf(section, most)}`;
    const many = numerals.at(times) ?? number(times);
    return `${many} ${times === 1 ? 'shift is' : 'shifts are'} likely to run short${times === 1 && areas.length > 1 ? '' : where}.`;
  }
  const wanting = shifts.filter(({ bedsToAdd }) => bedsToAdd > 0);
  if (wanting.length > 0) {
    return `No shift is likely to run short, but ${counted(new Set(wanting.map(({ from }) => from)).size, 'needs', 'need')} more beds than planned.`;
  }
  return 'The planned beds are enough for the planning risk in every shift of next week.';
}

function howMany(shifts: readonly ShiftRisk[], areaId: string): number {
  return shifts.filter((shift) => shift.areaId === areaId).length;
}

/** What stands under the headline: arrivals with their range, against the last four weeks. */
export function sayArrivals(section: SectionFacts): string {
  const { arrivals, fourWeeks, arrivalsRefusal } = section;
  if (!arrivals) return arrivalsRefusal ?? 'Arrivals are not forecast.';
  const { p10, p50, p90 } = arrivals.week;
  const usual = meanOfWeeks(fourWeeks, ({ arrivals: count }) => count, 2);
  const range = `Arrivals next week: most likely about ${number(p50)}, and with a chance of 8 in 10 between ${number(p10)} and ${number(p90)}`;
  if (usual === null) return `${range}. The log does not cover the last four weeks.`;
  const change = Math.round((p50 / usual - 1) * 100);
  const against =
    Math.abs(change) < 2 ? 'about as many as' : `${String(Math.abs(change))} % ${change > 0 ? 'more' : 'fewer'} than`;
  return `${range}; ${against} in the last four weeks (${number(usual)} a week).`;
}

/** Shifts whose chance passes the planning risk, worst first. */
export function shiftsAtRisk(section: SectionFacts): ShiftRisk[] {
  return (section.outlook?.shifts ?? [])
    .filter(({ bedsToAdd }) => bedsToAdd > 0)
    .sort((a, b) => b.bedsToAdd - a.bedsToAdd || b.chance - a.chance || a.from - b.from);
}

/** One shift at risk: its name, what it needs, what would cover it, and until when staff can be booked. */
export function sayRisk(
  section: SectionFacts,
  risk: ShiftRisk,
  writing: Writing,
  now: number,
): { name: string; need: string; cover: string; add: string } {
  const percent = `${String(Math.round(section.site.planningRisk * 100))} %`;
  const kind = section.areas.find(({ id }) => id === risk.areaId)?.spaceKind === 'chair' ? 'chair' : 'bed';
  const missing = risk.bedsThatDoNotExist > 0 ? `, ${number(risk.bedsThatDoNotExist)} of which do not exist` : '';
  const nurses = risk.nurseHours === null ? '' : ` (${counted(risk.nurseHours, 'nurse hour')})`;
  const book =
    risk.lastChanceAt <= now
      ? `the last chance to book was ${writing.moment(risk.lastChanceAt)}`
      : `book by ${writing.moment(risk.lastChanceAt)}`;
  return {
    name: `${writing.weekday(risk.from)} ${risk.shift}, ${nameOf(section, risk.areaId)}`,
    need: `Needs ${number(risk.bedsNeeded)} at a ${percent} risk, ${number(risk.staffed)} planned. Some time short: ${formatChance(risk.chance)}, ${riskWord(risk.chance).toLowerCase()}`,
    cover: `${counted(risk.bedsToAdd, `more ${kind}`, `more ${kind}s`)}${nurses}${missing}; ${book}`,
    add: `+${number(risk.bedsToAdd)}`,
  };
}

/** One figure of the last week against four weeks and a year, as printed. */
export interface HindsightRow {
  name: string;
  last: string;
  four: string;
  year: string;
}

const notShown = 'not shown';
const unknown = 'not known';

/** The last week in hindsight, small counts of people kept back. */
export function hindsightRows({ last, fourWeeks, year, site, plans }: SectionFacts): HindsightRow[] {
  const minimum = site.smallNumberMinimum;
  const row = (
    name: string,
    figure: (week: WeekFacts) => number | null,
    print: (value: number) => string,
    lastPrinted?: string,
    printMean: (value: number) => string = print,
  ): HindsightRow => {
    const own = figure(last);
    const mean = (weeks: WeekFacts[], least: number) => {
      const value = meanOfWeeks(weeks, figure, least);
      return value === null ? unknown : printMean(value);
    };
    return {
      name,
      last: lastPrinted ?? (own === null ? unknown : print(own)),
      four: mean(fourWeeks, 2),
      year: mean(year, weeksOfAYear),
    };
  };
  const people = (value: number) => {
    const shown = suppressAverage(value, minimum);
    return shown === null ? notShown : number(shown);
  };
  const ends = last.dispositions === null ? null : suppressSmall(last.dispositions, minimum);
  const left = dispositionCode['left before treatment'];
  const shownLeft = ends === null ? unknown : printCount(ends.counts[left]);
  const rows = [
    row('Arrivals', (week) => week.arrivals, number, ends === null ? unknown : printCount(ends.total), people),
    ...(plans.length === 0 ? [] : [row('Hours with an area short', (week) => week.hoursAnyShort, number)]),
    row('Boarding, patient-hours', (week) => week.boardingHours, number),
    row('Share of need that is boarding', boardingShare, (value) => `${String(Math.round(value * 100))} %`),
    row('Left before treatment', (week) => week.dispositions?.[left] ?? null, number, shownLeft, people),
  ];
  if (site.waitLimitMinutes !== null) {
    const { waits } = last;
    const shown =
      waits === null
        ? unknown
        : printCount(suppressSmall([waits.tooLong, waits.known - waits.tooLong], minimum).counts[0]);
    rows.push(
      row(
        `Waited over ${String(site.waitLimitMinutes)} min for a bed space`,
        (week) => week.waits?.tooLong ?? null,
        number,
        shown,
        people,
      ),
    );
  }
  return rows;
}

function boardingShare({ boardingHours, presentHours }: WeekFacts): number | null {
  return boardingHours === null || presentHours === null || presentHours === 0 ? null : boardingHours / presentHours;
}

function printCount(count: number | null): string {
  return count === null ? notShown : number(count);
}

/** What was done in the last week, as a sentence. */
export function sayDone({ done }: SectionFacts): string {
  const acknowledged =
    done.acknowledged === 0
      ? 'No risk was acknowledged'
      : `${counted(done.acknowledged, 'risk')} ${done.acknowledged === 1 ? 'was' : 'were'} acknowledged`;
  const changed =
    done.bedChanges === 0
      ? 'staffed beds were not changed on the day'
      : `staffed beds were changed on the day ${done.bedChanges === 1 ? 'once' : `${number(done.bedChanges)} times`}`;
  return `${acknowledged}; ${changed}.`;
}

/** How the last week's forecast did. */
export function sayScores({ scores }: SectionFacts): string {
  if (!scores)
    return 'None of last week’s forecasts has been scored yet: that wants outlooks issued before it and the log of the week itself.';
  const { leadHours, hours, inside, expected } = scores;
  return `${number(inside)} of ${counted(hours, 'hour')} fell inside the 90 % range forecast ${counted(leadHours, 'hour')} ahead; about ${number(expected)} were to be expected.`;
}

/** What must be known beside the figures: what is true of this site now. */
export function siteCautions(section: SectionFacts, now: number): string[] {
  const zone = makeZone(section.site.timeZone);
  const writing = writingOf(zone);
  const { model, outlook, calendar, gaps, plans, last, lastWeek } = section;
  const said: string[] = [];
  if (model?.fittedAt !== null && model && now - model.fittedAt > 45 * 86_400) {
    said.push(`The model is ${counted((now - model.fittedAt) / 86_400, 'day')} old: fit a new one.`);
  }
  said.push(...(model?.drift ?? []));
  if (model && !outlook) said.push('Bed need for next week has not been computed; only arrivals are told.');
  if (outlook) {
    const uncounted = section.areas.filter(({ id }) =>
      outlook.shifts.some((each) => each.areaId === id && !each.counted),
    );
    if (uncounted.length > 0) {
      said.push(
        `Without a census when it was computed: ${uncounted.map(({ name }) => name).join(', ')}. The start of the week stands on the model alone.`,
      );
    }
    const unseen = section.areas.filter(({ id }) => !outlook.shifts.some(({ areaId }) => areaId === id));
    if (unseen.length > 0)
      said.push(`Not counted, because the model has never seen it: ${unseen.map(({ name }) => name).join(', ')}.`);
  }
  for (const day of calendar)
    said.push(`${day.date}: ${day.name} (${day.kind}). Such a day may differ from what is forecast.`);
  if (last.arrivals === null) said.push('The log does not cover the whole of last week: it is not told in hindsight.');
  for (const gap of gaps)
    said.push(
      `A gap in the log last week, from ${writing.moment(gap.from)} to ${writing.moment(gap.to)}: counts are too low there.`,
    );
  const first = plans.at(0);
  if (first && first.savedAt > lastWeek.from) {
    said.push(
      `Before ${writing.moment(first.savedAt)} no plan was on record: hours short are counted against the first one.`,
    );
  }
  return said;
}

export const cautions = [
  'Planning aid. Not for decisions about any individual patient. Follow your hospital’s clinical governance, escalation policy and local law; a licensed clinician’s judgement comes first.',
  'A forecast is a range. Act on the percentile your policy names, not on the median alone. It does not foresee a major incident or a sudden closure: use your incident plan.',
  'A low chance is not a reason to staff below your safe minimum.',
];
