import { studyDrift } from '../support/drift-study.ts';
import type { Soak } from './soak.ts';

const runs = 1500;
const sites = [
  { visitsPerDay: 260, daysPerLog: 1 },
  { visitsPerDay: 260, daysPerLog: 7 },
  { visitsPerDay: 70, daysPerLog: 1 },
  { visitsPerDay: 70, daysPerLog: 7 },
];

/**
 * Site-years of known truth, of other seeds than those that the limits were chosen on: how often the watch is wrong, and how soon
 * it is right. Demanded of nightly and of weekly logs: at most one false flag a year; at 260 visits a day a 10 % change of level
 * seen within three weeks in 90 % of runs, intervals 20 % too narrow within twelve. What a smaller site sees of a change of level
 * is reported. (The truth is the simulation's own.)
 */
export const driftWatch: Soak = {
  name: 'drift-watch',
  run(print) {
    const percent = (share: number) => `${(100 * share).toFixed(1)} %`;
    for (const site of sites) {
      const rates = studyDrift(site, runs, 500_000);
      print(
        `${String(site.visitsPerDay)} visits a day, a log every ${site.daysPerLog === 1 ? 'night' : 'week'}: ` +
          `${rates.falsePerYear.toFixed(2)} false flags a year; 10 % level within three weeks ${percent(rates.shiftWithinThree)}; ` +
          `20 % too narrow within twelve ${percent(rates.narrowWithinTwelve)} (${String(runs)} runs)`,
      );
      if (rates.falsePerYear > 1) throw new Error('more than one false flag a year');
      if (rates.narrowWithinTwelve < 0.9) throw new Error('too narrow intervals are seen too late');
      if (site.visitsPerDay !== 260) continue;
      if (rates.shiftWithinThree < 0.9) throw new Error('a change of level is seen too late');
    }
  },
};
