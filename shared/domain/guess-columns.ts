import { headerWords } from './screen-header.ts';
import { visitColumns, type VisitColumn } from './visit-row.ts';

/** What is known of a column of a foreign file before it is mapped. */
export interface ColumnSketch {
  header: string;
  /** Its values are times. */
  isTime: boolean;
  /** Its values are a few words that repeat. */
  isChoice: boolean;
  /** It may not be mapped: something in it could identify a patient. */
  isBarred: boolean;
}

const rules: Record<VisitColumn, { isTime: boolean; words: readonly RegExp[] }> = {
  arrival_at: {
    isTime: true,
    words: [/\barriv\w*/, /\b(?:registration|registered|check ?in|booked in|presented|attendance)\b/],
  },
  bed_space_at: {
    isTime: true,
    words: [/\b(?:bed space|roomed|cubicle)\b/, /\b(?:bed|room|space|placed|bay|bedded)\b/],
  },
  admission_decision_at: {
    isTime: true,
    words: [/\b(?:decision|dta|decided)\b/, /\b(?:admit\w*|admission|bed request\w*)\b/],
  },
  departure_at: { isTime: true, words: [/\b(?:depart\w*|left|leave|leaving)\b/, /\b(?:discharge\w*|exit|out)\b/] },
  care_area: { isTime: false, words: [/\barea\b/, /\b(?:zone|unit|ward|pod|location|stream|department|dept)\b/] },
  disposition: {
    isTime: false,
    words: [/\b(?:disposition|disposal|outcome)\b/, /\b(?:destination|dest|discharge\w*|left to)\b/],
  },
  arrived_by_ambulance: { isTime: false, words: [/\b(?:ambulance|amb|ems)\b/, /\b(?:mode|transport)\b/] },
};

/**
 * Guesses which column of a file is which, by header and by kind of value. The product's own names win,
 * then the plainer word; a column is taken once.
 * @returns index of the column for each of ours; null where none fits
 */
export function guessColumns(sketches: readonly ColumnSketch[]): Record<VisitColumn, number | null> {
  const guess = Object.fromEntries(visitColumns.map((column) => [column, null])) as Record<VisitColumn, number | null>;
  const taken = new Set<number>();
  const take = (column: VisitColumn, fits: (sketch: ColumnSketch) => boolean) => {
    if (guess[column] !== null) return;
    const index = sketches.findIndex((sketch, at) => {
      const isOfKind = rules[column].isTime ? sketch.isTime : sketch.isChoice;
      return !taken.has(at) && !sketch.isBarred && isOfKind && fits(sketch);
    });
    if (index < 0) return;
    guess[column] = index;
    taken.add(index);
  };
  for (const column of visitColumns) take(column, (sketch) => sketch.header.toLowerCase() === column);
  for (const rank of [0, 1]) {
    for (const column of visitColumns)
      take(column, (sketch) => rules[column].words[rank].test(headerWords(sketch.header)));
  }
  return guess;
}
