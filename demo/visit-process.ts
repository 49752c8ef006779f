import { generalId, saltbyId } from './farrowmere-accounts.ts';

/** A gamma law of hours: shape, and mean in hours. */
export interface GammaHours {
  shape: number;
  mean: number;
}

/** How patients arrive at one area and leave it: the truth that the demo's visits are drawn from. */
export interface AreaProcess {
  areaId: string;
  arrivalsPerDay: number;
  /** Relative rate by local hour of day, 24 figures; only their proportions count. */
  byHour: readonly number[];
  /** Factor by ISO weekday, Monday first. */
  byWeekday: readonly number[];
  /** Height of the winter peak: 0.05 is 5 % above the year's mean in mid-January, 5 % below in mid-July. */
  winter: number;
  /** Standard deviation of the logarithm of the area's own day factor. */
  daySd: number;
  ambulanceShare: number;
  /** Shares by block of the day (00–06, 06–12, 12–18, 18–24) of those who stay; the rest go home. */
  admitted: readonly [number, number, number, number];
  transferred: number;
  /** Chance of leaving before treatment at an ordinary hour. */
  left: number;
  /** Arrival to bed space at an ordinary hour. */
  wait: GammaHours;
  /** Bed space to departure of those who go home or are transferred, in hours at daytime pace: two kinds of visit. */
  treatment: readonly [quick: GammaHours, slow: GammaHours];
  slowShare: number;
  /** Bed space to admission decision, at daytime pace. */
  decision: GammaHours;
  /** Admission decision to departure, in hours at the wards' mean pace. */
  boarding: GammaHours;
}

const adults = [
  0.62, 0.5, 0.42, 0.36, 0.34, 0.37, 0.46, 0.66, 0.98, 1.3, 1.48, 1.52, 1.47, 1.42, 1.38, 1.36, 1.38, 1.4, 1.38, 1.3,
  1.18, 1.05, 0.9, 0.75,
];
const walkIns = [
  0.3, 0.2, 0.15, 0.12, 0.12, 0.16, 0.32, 0.75, 1.4, 1.85, 1.9, 1.75, 1.6, 1.5, 1.45, 1.45, 1.5, 1.55, 1.5, 1.3, 1.05,
  0.8, 0.58, 0.42,
];
const children = [
  0.5, 0.38, 0.3, 0.25, 0.24, 0.26, 0.35, 0.55, 0.85, 1.1, 1.2, 1.2, 1.18, 1.2, 1.25, 1.4, 1.6, 1.8, 1.95, 1.9, 1.6,
  1.2, 0.9, 0.65,
];
const steady = [
  0.82, 0.75, 0.7, 0.66, 0.65, 0.68, 0.76, 0.88, 1, 1.12, 1.2, 1.22, 1.2, 1.17, 1.15, 1.13, 1.14, 1.15, 1.15, 1.12,
  1.08, 1.02, 0.96, 0.89,
];
const weekdays = [1.1, 1.01, 0.98, 0.97, 0.98, 0.97, 0.99];
const weekendHeavy = [1.02, 0.95, 0.94, 0.95, 0.98, 1.07, 1.09];

const general: AreaProcess[] = [
  {
    areaId: 'farrowmere-general-resuscitation',
    arrivalsPerDay: 15,
    byHour: steady,
    byWeekday: weekdays,
    winter: 0.06,
    daySd: 0.03,
    ambulanceShare: 0.86,
    admitted: [0.66, 0.6, 0.6, 0.64],
    transferred: 0.09,
    left: 0,
    wait: { shape: 1, mean: 0.05 },
    treatment: [
      { shape: 2.2, mean: 2.3 },
      { shape: 1.5, mean: 5 },
    ],
    slowShare: 0.25,
    decision: { shape: 2, mean: 1.5 },
    boarding: { shape: 1.2, mean: 1.3 },
  },
  {
    areaId: 'farrowmere-general-acute',
    arrivalsPerDay: 104,
    byHour: adults,
    byWeekday: weekdays,
    winter: 0.04,
    daySd: 0.04,
    ambulanceShare: 0.46,
    admitted: [0.31, 0.26, 0.26, 0.29],
    transferred: 0.03,
    left: 0.03,
    wait: { shape: 1.3, mean: 0.7 },
    treatment: [
      { shape: 2.6, mean: 2.4 },
      { shape: 1.6, mean: 5.2 },
    ],
    slowShare: 0.28,
    decision: { shape: 2.4, mean: 2.4 },
    boarding: { shape: 1.1, mean: 3.2 },
  },
  {
    areaId: 'farrowmere-general-ambulatory',
    arrivalsPerDay: 86,
    byHour: walkIns,
    byWeekday: weekendHeavy,
    winter: -0.03,
    daySd: 0.04,
    ambulanceShare: 0.05,
    admitted: [0.05, 0.04, 0.04, 0.05],
    transferred: 0.01,
    left: 0.045,
    wait: { shape: 1.4, mean: 0.6 },
    treatment: [
      { shape: 2.2, mean: 1.2 },
      { shape: 1.5, mean: 2.8 },
    ],
    slowShare: 0.25,
    decision: { shape: 2.2, mean: 2 },
    boarding: { shape: 1.1, mean: 1.6 },
  },
  {
    areaId: 'farrowmere-general-children',
    arrivalsPerDay: 37,
    byHour: children,
    byWeekday: weekendHeavy,
    winter: 0.14,
    daySd: 0.07,
    ambulanceShare: 0.12,
    admitted: [0.14, 0.1, 0.1, 0.12],
    transferred: 0.015,
    left: 0.025,
    wait: { shape: 1.3, mean: 0.45 },
    treatment: [
      { shape: 2.2, mean: 1.6 },
      { shape: 1.5, mean: 3.6 },
    ],
    slowShare: 0.25,
    decision: { shape: 2.2, mean: 2.1 },
    boarding: { shape: 1.2, mean: 1.3 },
  },
  {
    areaId: 'farrowmere-general-observation',
    arrivalsPerDay: 18,
    byHour: steady,
    byWeekday: weekdays,
    winter: 0.03,
    daySd: 0.04,
    ambulanceShare: 0.3,
    admitted: [0.24, 0.22, 0.22, 0.24],
    transferred: 0.03,
    left: 0.005,
    wait: { shape: 1.2, mean: 0.35 },
    treatment: [
      { shape: 3, mean: 6.5 },
      { shape: 2, mean: 12 },
    ],
    slowShare: 0.3,
    decision: { shape: 2.4, mean: 5.5 },
    boarding: { shape: 1.1, mean: 3 },
  },
];

const saltby: AreaProcess[] = [
  {
    areaId: 'saltby-bay-acute',
    arrivalsPerDay: 32,
    byHour: adults,
    byWeekday: weekdays,
    winter: 0.02,
    daySd: 0.05,
    ambulanceShare: 0.4,
    admitted: [0.29, 0.25, 0.25, 0.27],
    transferred: 0.06,
    left: 0.025,
    wait: { shape: 1.3, mean: 0.5 },
    treatment: [
      { shape: 2.4, mean: 2.2 },
      { shape: 1.6, mean: 4.8 },
    ],
    slowShare: 0.27,
    decision: { shape: 2.4, mean: 2.2 },
    boarding: { shape: 1.1, mean: 2.6 },
  },
  {
    areaId: 'saltby-bay-minor-injuries',
    arrivalsPerDay: 38,
    byHour: walkIns,
    byWeekday: weekendHeavy,
    winter: -0.1,
    daySd: 0.06,
    ambulanceShare: 0.04,
    admitted: [0.02, 0.02, 0.02, 0.02],
    transferred: 0.03,
    left: 0.035,
    wait: { shape: 1.4, mean: 0.5 },
    treatment: [
      { shape: 2.2, mean: 0.9 },
      { shape: 1.5, mean: 2.1 },
    ],
    slowShare: 0.2,
    decision: { shape: 2.2, mean: 1.6 },
    boarding: { shape: 1.1, mean: 1.4 },
  },
];

/** Every area's process, by site. */
export const siteProcesses: Record<string, { streamKey: number; areas: readonly AreaProcess[] }> = {
  [generalId]: { streamKey: 1, areas: general },
  [saltbyId]: { streamKey: 2, areas: saltby },
};

/** Pace of treatment by local hour of day: fewer doctors, slower results and no lifts home at night. */
export const treatmentPace: readonly number[] = [
  0.72, 0.66, 0.62, 0.6, 0.58, 0.6, 0.66, 0.78, 0.95, 1.06, 1.12, 1.14, 1.14, 1.14, 1.12, 1.1, 1.1, 1.1, 1.08, 1.06,
  1.04, 1, 0.92, 0.82,
];

/** Pace at which wards take boarding patients by local hour of day: beds there empty from late morning on. */
export const wardPace: readonly number[] = [
  0.5, 0.42, 0.38, 0.36, 0.36, 0.38, 0.42, 0.45, 0.5, 0.65, 0.95, 1.45, 1.75, 1.85, 1.8, 1.7, 1.6, 1.5, 1.35, 1.2, 1.05,
  0.9, 0.75, 0.6,
];

/** The wards discharge less at weekends and on public holidays. */
export const weekendWardPace = 0.8;

/** Day-to-day factors: standard deviation of the logarithm, and how much of one day is left in the next. */
export const dayVariation = {
  arrivals: { sd: 0.05, carry: 0.45 },
  area: { carry: 0.3 },
  treatment: { sd: 0.07, carry: 0.4 },
  wards: { sd: 0.34, carry: 0.62 },
  /** By week, drawn out linearly between weeks: the slow level. */
  level: { sd: 0.03, carry: 0.93 },
} as const;

/** Friday and Saturday nights bring more to these areas between 21:00 and 04:00. */
export const weekendNightFactor = 1.22;
export const weekendNightAreas: readonly string[] = [
  'farrowmere-general-acute',
  'farrowmere-general-resuscitation',
  'saltby-bay-acute',
];

/** Factor of the fair on arrivals, by site, from noon to 02:00. */
export const fairFactor: Record<string, number> = { [generalId]: 1.08, [saltbyId]: 1.55 };

/** Factor of a public holiday on arrivals; Christmas Day is quiet, the days after it are not. */
export function holidayFactor(date: string): number {
  if (date.endsWith('-12-25')) return 0.76;
  if (date.endsWith('-01-01')) return 1.1;
  return 1.05;
}
