import type { CareArea, Shift, Site } from '../shared/api/sites.ts';
import { generalId, saltbyId } from './farrowmere-accounts.ts';
import { country, region } from './farrowmere-calendar.ts';
import { dayPlans, staffedByHalfHour } from './farrowmere-plan.ts';

/** One site of the demo: its settings as the product knows them, and its staffed-bed plan. */
export interface DemoSite extends Site {
  country: string;
  region: string;
  /** Staffed beds of each area by half hour of week, local time, Monday 00:00 first. */
  plan: { areaId: string; halfHours: number[] }[];
}

/** The seed of the demo's visits. */
export const demoSeed = 4310;

const groupName = 'Farrowmere';
const timeZone = 'Europe/London';

const generalAreas: CareArea[] = [
  {
    id: 'farrowmere-general-resuscitation',
    name: 'Resuscitation',
    spaceKind: 'bed',
    spaces: 8,
    safeMinimum: 4,
    bedStep: 1,
    noticeHours: 1,
    alertLimit: 0.1,
    bedsPerNurse: 1,
    lendsTo: [],
    escalationNote:
      'Tell the consultant in charge. Move the most stable patient to Acute once a bed space there is ready. ' +
      'Ask the site coordinator for one more resuscitation nurse.',
  },
  {
    id: 'farrowmere-general-acute',
    name: 'Acute',
    spaceKind: 'bed',
    spaces: 34,
    safeMinimum: 20,
    bedStep: 2,
    noticeHours: 4,
    alertLimit: 0.25,
    bedsPerNurse: 4,
    lendsTo: ['farrowmere-general-resuscitation'],
    escalationNote:
      'Call the site coordinator and name the hour. Ask the wards for boarding patients to be taken first. ' +
      'Open bed spaces 29 to 34 if two nurses can be found; otherwise agree with Observation which patients it can take.',
  },
  {
    id: 'farrowmere-general-ambulatory',
    name: 'Ambulatory',
    spaceKind: 'chair',
    spaces: 24,
    safeMinimum: 8,
    bedStep: 2,
    noticeHours: 2,
    alertLimit: 0.25,
    bedsPerNurse: 6,
    lendsTo: [],
    escalationNote: 'Open the second consulting room. Ask the duty doctor to see the shortest visits together first.',
  },
  {
    id: 'farrowmere-general-children',
    name: 'Children',
    spaceKind: 'bed',
    spaces: 14,
    safeMinimum: 6,
    bedStep: 2,
    noticeHours: 4,
    alertLimit: 0.2,
    bedsPerNurse: 4,
    lendsTo: [],
    escalationNote: "Tell the children's ward coordinator. Ask for the short-stay bay of the ward to be opened early.",
  },
  {
    id: 'farrowmere-general-observation',
    name: 'Observation',
    spaceKind: 'bed',
    spaces: 14,
    safeMinimum: 8,
    bedStep: 2,
    noticeHours: 6,
    alertLimit: 0.25,
    bedsPerNurse: 5,
    lendsTo: ['farrowmere-general-acute'],
    escalationNote:
      'Bring the next review round forward by two hours. Ask transport for the patients who wait for it only.',
  },
];

const saltbyAreas: CareArea[] = [
  {
    id: 'saltby-bay-acute',
    name: 'Acute',
    spaceKind: 'bed',
    spaces: 12,
    safeMinimum: 7,
    bedStep: 1,
    noticeHours: 3,
    alertLimit: 0.2,
    bedsPerNurse: 4,
    lendsTo: [],
    escalationNote:
      'Call the duty manager. Ask Farrowmere General whether it can take the next transfer early; agree the time with transport.',
  },
  {
    id: 'saltby-bay-minor-injuries',
    name: 'Minor injuries',
    spaceKind: 'chair',
    spaces: 12,
    safeMinimum: 4,
    bedStep: 1,
    noticeHours: 2,
    alertLimit: 0.25,
    bedsPerNurse: 6,
    lendsTo: ['saltby-bay-acute'],
    escalationNote: 'Open the treatment room beside the entrance. Tell arriving visitors the likely wait.',
  },
];

function shifts(siteId: string): Shift[] {
  return [
    { id: `${siteId}-early`, name: 'Early', startMinute: 7 * 60, endMinute: 14 * 60 + 30, leadTimeHours: 48 },
    { id: `${siteId}-late`, name: 'Late', startMinute: 14 * 60, endMinute: 21 * 60 + 30, leadTimeHours: 48 },
    { id: `${siteId}-night`, name: 'Night', startMinute: 21 * 60, endMinute: 7 * 60 + 30, leadTimeHours: 72 },
  ];
}

/** Where alert mail of a site goes; only the larger one asks for it. */
export const onCallAddresses: Record<string, string> = { [generalId]: 'on-call@farrowmere.example' };

const bedMeetings: Record<string, number[]> = {
  [generalId]: [8 * 60 + 30, 12 * 60 + 30, 16 * 60, 20 * 60],
  [saltbyId]: [9 * 60, 16 * 60],
};
const waitLimits: Record<string, number> = { [generalId]: 240, [saltbyId]: 180 };

function demoSite(id: string, name: string, areas: CareArea[]): DemoSite {
  return {
    id,
    name,
    groupName,
    timeZone,
    country,
    region,
    planningRisk: 0.1,
    bedMeetingMinutes: bedMeetings[id],
    waitLimitMinutes: waitLimits[id],
    areas,
    shifts: shifts(id),
    plan: areas.map((area) => ({ areaId: area.id, halfHours: staffedByHalfHour(dayPlans[area.id]) })),
  };
}

/** The demo's health group. Everything in it is invented. */
export const demoSites: readonly DemoSite[] = [
  demoSite(generalId, 'Farrowmere General', generalAreas),
  demoSite(saltbyId, 'Saltby Bay', saltbyAreas),
];
