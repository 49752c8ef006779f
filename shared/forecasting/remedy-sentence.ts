import { formatChance } from '../domain/risk-word.ts';
import type { AreaOutlook, Chance } from './outlook-types.ts';

const numberWords = 'no one two three four five six seven eight nine ten eleven twelve'.split(' ');

/** The figures of an area that the sentence speaks from. */
export interface RemedyFigures extends Pick<AreaOutlook, 'bedsToAdd' | 'bedsThatDoNotExist' | 'boardingOut'> {
  /** Outlooks of an earlier engine do not have it. */
  shortfallWithEverySpace?: readonly Chance[] | undefined;
}

export interface SentenceArea {
  areaId: string;
  name: string;
  spaceKind: 'bed' | 'chair';
  spaces: number;
  alertLimit: number;
  /** When the area was last counted, UTC seconds; null if never or too long ago to count. */
  censusTakenAt: number | null;
}

/** A count as it is spoken: in words up to twelve. */
export function countInWords(count: number): string {
  return numberWords[count] ?? String(count);
}

function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

/**
 * Says what would bring an area under its limit: beds by hour in its own steps, how many of them do
 * not exist, and how many boarding patients leaving would do instead. Every figure is the outlook's.
 */
export function sayRemedy(
  worst: {
    area: SentenceArea;
    outlook: RemedyFigures;
    /** Indexes of the hours past the limit, ascending, at least one. */ past: readonly number[];
  },
  hours: readonly number[],
  time: (at: number) => string,
  say: (text: string, strong?: boolean) => void,
  percent: (share: number) => string,
): void {
  const { area, outlook, past } = worst;
  const limit = `${percent(area.alertLimit)} limit`;
  const unit = area.spaceKind === 'chair' ? 'chair' : 'bed';
  const adds = past.map((index) => ({ index, beds: outlook.bedsToAdd[index] ?? 0 })).filter((add) => add.beds > 0);
  const first = adds[0];
  const last = adds.at(-1);
  if (!first || !last) {
    say(`It passes its ${limit} from ${time(hours[past[0]])}.`);
    return;
  }
  const most = Math.max(...adds.map((add) => add.beds));
  const easing = adds.every((add, place) => place === 0 || add.beds <= adds[place - 1].beds);
  const beds = `${countInWords(most)} more staffed ${unit}${most === 1 ? '' : 's'}`;
  if (first === last) say(`${capital(beds)} at ${time(hours[first.index])}`, true);
  else if (easing) say(`${capital(beds)} from ${time(hours[first.index])}`, true);
  else say(`Up to ${beds} from ${time(hours[first.index])} to ${time(hours[last.index])}`, true);
  if (easing && last.beds < most) say(`, easing to ${countInWords(last.beds)} by ${time(hours[last.index])},`);
  const onlySome = adds.length < past.length;
  say(
    `${most === 1 ? 'brings' : 'bring'} ${onlySome ? 'those hours' : first === last ? 'it' : 'every hour'} to the ${limit} or under.`,
  );

  const lacking = adds
    .map((add) => ({ ...add, missing: outlook.bedsThatDoNotExist[add.index] ?? 0 }))
    .reduce((found, add) => (add.missing > found.missing ? add : found));
  if (lacking.missing > 0) {
    const at = time(hours[lacking.index]);
    const space = unit === 'bed' ? 'bed space' : 'chair';
    const remains = outlook.shortfallWithEverySpace?.[lacking.index]?.chance;
    const exists =
      lacking.missing === lacking.beds
        ? `no further ${space}s exist`
        : `${countInWords(lacking.missing)} of the ${countInWords(lacking.beds)} ` +
          (lacking.missing === 1 ? `does not exist as a ${space}` : `do not exist as ${space}s`);
    const left = remains === undefined ? '' : `; with every ${space} staffed ${formatChance(remains)} remains`;
    say(`At ${at} ${exists}${left}.`, true);
  }
  if (outlook.boardingOut && outlook.boardingOut.patients > 0) {
    const { patients, by } = outlook.boardingOut;
    say(
      `Or ${countInWords(patients)} boarding patient${patients === 1 ? '' : 's'} out by ${time(by)}, for the hours of that shift.`,
    );
  }
}
