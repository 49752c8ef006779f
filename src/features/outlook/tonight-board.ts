import type { Acknowledgement } from '../../../shared/api/acknowledgements.ts';
import type { Outlook, Tonight } from '../../../shared/api/outlooks.ts';
import type { CareArea, Site } from '../../../shared/api/sites.ts';
import { bedsAt } from '../../../shared/domain/bed-schedule.ts';
import type { Zone } from '../../../shared/domain/zoned-time.ts';
import type { NeedColumn, StaffedStep } from '../../../shared/charts/need-columns.ts';
import type { Chance, NeedByHour } from '../../../shared/forecasting/outlook-types.ts';
import { hoursPastLimit } from '../../../shared/forecasting/hours-past-limit.ts';
import { isNight, nightIsOverBefore } from '../../../shared/forecasting/tonight-span.ts';
import { inChargeSince } from './asked-hours.ts';
import { printedShortfall } from '../../../shared/forecasting/printed-shortfall.ts';

type AreaOutlook = Outlook['result']['areas'][number];

/** Full hours shown before now, of which the first view shows the last few. */
export const pastHours = 6;

export interface BoardHour {
  at: number;
  past: boolean;
  /** Where the hour stands in the outlook's own arrays; -1 for a past hour. */
  index: number;
}

export interface SomeTime {
  chance: Chance;
  /** "some time tonight", "some time before 21:30" of the shift that runs, "some time in Early" of one to come. */
  when: { kind: 'tonight' } | { kind: 'before'; at: number } | { kind: 'shift'; name: string };
}

export interface BoardArea {
  area: CareArea;
  outlook: AreaOutlook;
  counted: boolean;
  columns: NeedColumn[];
  staffed: StaffedStep[];
  /** Printed chances of the hours ahead. */
  chances: readonly Chance[];
  headroom: number[];
  bedsToAdd: number[];
  bedsThatDoNotExist: number[];
  /** Place among the hours ahead of the first past the limit, null if none. */
  firstPast: number | null;
  /** Hours of tonight past the limit, UTC seconds: what is asked about. */
  pastTonight: number[];
  /** Acknowledgements that speak of any of these hours, oldest first. */
  acknowledgements: Acknowledgement[];
  /** When the shift in charge came in, UTC seconds: an acknowledgement of before is not its own. */
  since: number;
  someTime: SomeTime | null;
}

export interface Board {
  hours: BoardHour[];
  ahead: number[];
  areas: BoardArea[];
  department: {
    columns: NeedColumn[];
    staffed: StaffedStep[];
    someAreaShort: readonly Chance[];
    pooled: readonly Chance[];
    headroom: number[];
    admittedLeaving: number[];
    arrivalsToAdmit: number[];
    someTime: SomeTime | null;
    /** Every area was counted. */
    counted: boolean;
  };
}

function forecastColumn(need: NeedByHour, at: number, index: number, actual?: number | null): NeedColumn {
  const { p5, p25, p50, p75, p90, p95 } = need.need;
  return {
    kind: 'forecast',
    at,
    staffed: need.staffed[index],
    p5: p5[index],
    p25: p25[index],
    p50: p50[index],
    p75: p75[index],
    p90: p90[index],
    p95: p95[index],
    ...(actual === undefined ? {} : { actual }),
  };
}

/** The greatest of the chances of any shortfall in the shift that runs and those up to the night to come. */
function someTimeOf(
  shifts: readonly { name: string; from: number; to: number; someTime: Chance }[],
  now: number,
  zone: Zone,
): SomeTime | null {
  const coming = shifts.filter((shift) => shift.to > now);
  const night = coming.findIndex((shift) => isNight(shift, zone) && shift.to - now >= nightIsOverBefore);
  const candidates = coming.slice(0, night < 0 ? 1 : night + 1);
  const worst = candidates.reduce<(typeof candidates)[number] | null>(
    (found, shift) => (found && found.someTime.chance >= shift.someTime.chance ? found : shift),
    null,
  );
  if (!worst) return null;
  const when: SomeTime['when'] =
    worst === coming[night]
      ? { kind: 'tonight' }
      : worst.from <= now
        ? { kind: 'before', at: worst.to }
        : { kind: 'shift', name: worst.name };
  return { chance: worst.someTime, when };
}

/** Staffed beds of the drawing: what was in force at the past hours, then the outlook's own steps. */
function stepsOf(
  hours: readonly BoardHour[],
  pastBeds: (at: number) => number | null,
  steps: readonly StaffedStep[],
): StaffedStep[] {
  const start = steps[0]?.at ?? Infinity;
  const before = hours.flatMap((hour) => {
    const beds = hour.past && hour.at < start ? pastBeds(hour.at) : null;
    return beds === null ? [] : [{ at: hour.at, beds }];
  });
  const joined = [...before, ...steps];
  const found = joined.filter((step, index) => index === 0 || step.beds !== joined[index - 1].beds);
  return found.length > 0 ? found : [];
}

function sumSteps(areas: readonly StaffedStep[][]): StaffedStep[] {
  const times = [...new Set(areas.flatMap((steps) => steps.map((step) => step.at)))].sort((a, b) => a - b);
  return times.map((at) => ({
    at,
    beds: areas.reduce((sum, steps) => sum + (steps.length > 0 ? bedsAt(steps, at) : 0), 0),
  }));
}

/**
 * The page's figures from the outlook as it was issued: hours before and after now, and for the
 * department and each area in the site's own order what is drawn and printed. Hours of the outlook
 * that have passed by now leave the forecast; what is then known of them comes from the past hours.
 * An earlier outlook is built as of the time it was issued: past hours that lie after it are what then happened.
 */
export function buildBoard(tonight: Tonight, outlook: Outlook, site: Site, zone: Zone): Board {
  const { result } = outlook;
  const ahead = result.hours.flatMap((at, index) => (at > tonight.now ? [index] : []));
  const firstAhead = ahead.length > 0 ? result.hours[ahead[0]] : (result.hours.at(-1) ?? tonight.now) + 3600;
  const hours: BoardHour[] = [
    ...Array.from({ length: pastHours }, (_, place) => ({
      at: firstAhead - (pastHours - place) * 3600,
      past: true,
      index: -1,
    })),
    ...ahead.map((index) => ({ at: result.hours[index], past: false, index })),
  ];
  const pastAt = new Map(tonight.past.map((hour) => [hour.at, hour]));
  const pick = <T>(figures: readonly T[]) => ahead.map((index) => figures[index]);

  const since = inChargeSince(zone, site.shifts, tonight.now);
  const areas = site.areas.flatMap((area): BoardArea[] => {
    const found = result.areas.find((candidate) => candidate.areaId === area.id);
    if (!found) return [];
    const pastArea = (at: number) => pastAt.get(at)?.areas.find((candidate) => candidate.areaId === area.id);
    const chances = pick(printedShortfall(found, area.spaces));
    const firstPast = chances.findIndex((cell) => cell.chance > area.alertLimit);
    const steps = outlook.staffedBeds.find((candidate) => candidate.areaId === area.id)?.steps ?? [];
    const pastTonight = hoursPastLimit(result, area.id, area, tonight.now, zone);
    return [
      {
        area,
        outlook: found,
        counted: found.counted,
        columns: hours.map((hour) =>
          hour.past
            ? {
                kind: 'past',
                at: hour.at,
                present: pastArea(hour.at)?.present ?? null,
                staffed: pastArea(hour.at)?.staffed ?? steps[0]?.beds ?? 0,
              }
            : forecastColumn(found, hour.at, hour.index, pastArea(hour.at)?.present),
        ),
        staffed: stepsOf(hours, (at) => pastArea(at)?.staffed ?? null, steps),
        chances,
        headroom: pick(found.headroom),
        bedsToAdd: pick(found.bedsToAdd),
        bedsThatDoNotExist: pick(found.bedsThatDoNotExist),
        firstPast: found.counted && firstPast >= 0 ? firstPast : null,
        pastTonight,
        acknowledgements: tonight.acknowledgements.filter(
          (made) => made.areaId === area.id && made.hours.some((hour) => pastTonight.includes(hour)),
        ),
        since,
        someTime: found.counted ? someTimeOf(found.shifts, tonight.now, zone) : null,
      },
    ];
  });

  const shifts = result.areas[0]?.shifts ?? [];
  const meanSum = (read: (area: AreaOutlook) => readonly number[]) =>
    ahead.map((index) => result.areas.reduce((sum, area) => sum + read(area)[index], 0));
  return {
    hours,
    ahead,
    areas,
    department: {
      columns: hours.map((hour, place) => {
        const parts = areas.map((one) => one.columns[place]);
        const present = parts.reduce<number | null>((sum, part) => {
          const known = part.kind === 'past' ? part.present : (part.actual ?? null);
          return sum === null || known === null ? null : sum + known;
        }, 0);
        if (!hour.past) {
          return forecastColumn(result.pooled, hour.at, hour.index, pastAt.has(hour.at) ? present : undefined);
        }
        return { kind: 'past', at: hour.at, present, staffed: parts.reduce((sum, part) => sum + part.staffed, 0) };
      }),
      staffed: sumSteps(areas.map((one) => one.staffed)),
      someAreaShort: pick(result.someAreaShort),
      pooled: pick(result.pooled.shortfall),
      headroom: pick(result.pooled.headroom),
      admittedLeaving: meanSum((area) => area.admittedLeaving.mean),
      arrivalsToAdmit: meanSum((area) => area.arrivalsToAdmit.mean),
      someTime: someTimeOf(
        shifts.map((shift, index) => ({
          ...shift,
          someTime: result.someAreaShortByShift[index] ?? { chance: 0, se: 0 },
        })),
        tonight.now,
        zone,
      ),
      counted: areas.every((one) => one.counted),
    },
  };
}
