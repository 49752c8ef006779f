import { hourOfWeek, hoursOfWeek, type LocalHour } from './hour-of-week.ts';

/** A run of hours without a single arrival, by place in the series, and how many were expected. */
export interface EmptyRun {
  first: number;
  last: number;
  expected: number;
}

/** Runs as unlikely as those reported are found by chance in one file of a hundred. */
const falseAlarms = 0.01;
const weeksForHourOfWeek = 4;

/**
 * Runs of hours in which no arrivals are implausible. With Poisson arrivals at the file's own mean for
 * the hour of the week, a run that expects m arrivals is empty with chance exp(-m); it is reported if
 * that chance times the number of hours is below 0.01 (Bonferroni), so m > ln(hours / 0.01): 13.7 in a
 * year. The mean leaves out the run that is judged; runs found are left out of all means, and the search
 * is made once more. In files below four weeks the mean of the hour of the day stands in.
 * Source: the Poisson law's mass at 0; the bound is Bonferroni's inequality.
 * @param counts arrivals by local hour
 * @param exposure hours that each label lasted; 0 leaves an hour out of everything
 * Cost: linear in the number of hours.
 */
export function findEmptyRuns(counts: Float64Array, exposure: Float64Array, first: LocalHour): EmptyRun[] {
  const isWeekly = counts.length >= weeksForHourOfWeek * hoursOfWeek;
  const placeOf = (index: number) => hourOfWeek(first + index) % (isWeekly ? hoursOfWeek : 24);
  const enough = Math.log(Math.max(1, counts.length) / falseAlarms);
  let runs: EmptyRun[] = [];
  for (let pass = 0; pass < 2; pass += 1) {
    const isOut = new Uint8Array(counts.length);
    for (const run of runs) isOut.fill(1, run.first, run.last + 1);
    const arrivals = new Float64Array(hoursOfWeek);
    const hours = new Float64Array(hoursOfWeek);
    for (let index = 0; index < counts.length; index += 1) {
      if (isOut[index] === 1 || exposure[index] === 0) continue;
      arrivals[placeOf(index)] += counts[index];
      hours[placeOf(index)] += exposure[index];
    }
    runs = emptyRuns(counts, exposure)
      .map((run) => ({ ...run, expected: expectedIn(run) }))
      .filter(({ expected }) => expected > enough);

    function expectedIn({ first: from, last }: { first: number; last: number }): number {
      const own = new Float64Array(hoursOfWeek);
      for (let index = from; index <= last; index += 1) if (isOut[index] === 0) own[placeOf(index)] += exposure[index];
      let expected = 0;
      for (let index = from; index <= last; index += 1) {
        const place = placeOf(index);
        const others = hours[place] - own[place];
        if (others > 0) expected += (arrivals[place] / others) * exposure[index];
      }
      return expected;
    }
  }
  return runs;
}

function emptyRuns(counts: Float64Array, exposure: Float64Array): { first: number; last: number }[] {
  const runs: { first: number; last: number }[] = [];
  let run: { first: number; last: number } | null = null;
  for (let index = 0; index < counts.length; index += 1) {
    if (exposure[index] === 0) continue;
    if (counts[index] > 0) {
      if (run) runs.push(run);
      run = null;
      continue;
    }
    run ??= { first: index, last: index };
    run.last = index;
  }
  if (run) runs.push(run);
  return runs;
}
