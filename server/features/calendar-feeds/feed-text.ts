import ical, { ICalCalendarMethod, ICalEventStatus, ICalEventTransparency } from 'ical-generator';
import { dayAndTime } from '../../../shared/domain/plan-change.ts';
import { formatChance, riskWord } from '../../../shared/domain/risk-word.ts';
import { localDate, makeZone, type Zone } from '../../../shared/domain/zoned-time.ts';
import type { FeedContent, ShiftPastLimit } from './shifts-past-limit.ts';

const hour = 3600;
/** A forecast older than this is said to be old in the feed itself: silence must not look calm. */
const oldAfterSeconds = 12 * hour;

const cautions = [
  'Planning aid. Not for decisions about any individual patient. Follow your hospital’s clinical governance, escalation policy and local law; a licensed clinician’s judgement comes first.',
  'A forecast is a range and moves: your calendar shows what it last read. It does not foresee a major incident or a sudden closure: use your incident plan.',
  'A low chance, or no entry here, is not a reason to staff below your safe minimum.',
];

const instant = (at: number): Date => new Date(at * 1000);

function at(zone: Zone, seconds: number): string {
  return `${dayAndTime(zone, seconds)} (${localDate(zone.toLocal(seconds))})`;
}

function describe(event: ShiftPastLimit, zone: Zone, now: number): string {
  const { chance, alertLimit, toAdd, lastChanceAt, issuedAt, counted, unit } = event;
  const lines = [
    `Chance of any shortfall during the shift: ${formatChance(chance)} (${riskWord(chance)}). The area’s limit is ${formatChance(alertLimit)}.`,
  ];
  if (toAdd && toAdd.beds > 0) {
    const missing =
      toAdd.doNotExist > 0
        ? `, of which ${String(toAdd.doNotExist)} ${toAdd.doNotExist === 1 ? 'does' : 'do'} not exist`
        : '';
    lines.push(
      `To meet the planning risk of ${formatChance(toAdd.planningRisk)}: ${String(toAdd.beds)} ${unit}${toAdd.beds === 1 ? '' : 's'} more${missing}.`,
    );
  }
  if (lastChanceAt !== null) {
    lines.push(`Last chance to book${lastChanceAt < now ? ' has passed' : ''}: ${at(zone, lastChanceAt)}.`);
  }
  if (!counted) lines.push('Not counted: the forecast stands on no census of this area.');
  lines.push(`Forecast issued ${at(zone, issuedAt)}; times are the site’s.`, ...cautions);
  return lines.join('\n');
}

/**
 * The feed as iCalendar (RFC 5545, with NAME and REFRESH-INTERVAL of RFC 7986): one event a shift past the limit, times in
 * UTC. A shift keeps its UID from forecast to forecast; SEQUENCE is the minute that its forecast was issued in, so that it only
 * ever grows; DTSTAMP is that instant. Where there is nothing to show, one whole-day event says why.
 * @param home address of the site's week ahead
 */
export function feedText(
  site: { id: string; name: string; timeZone: string },
  { shifts, issuedAt }: FeedContent,
  now: number,
  home: string,
): string {
  const zone = makeZone(site.timeZone);
  const calendar = ical({
    name: `Shifts past the limit, ${site.name}`,
    description: cautions[0],
    prodId: { company: 'Shoalmark', product: 'Shifts past the limit', language: 'EN' },
    method: ICalCalendarMethod.PUBLISH,
    ttl: hour,
  });
  const common = (stamp: number) => ({
    stamp: instant(stamp),
    lastModified: instant(stamp),
    sequence: Math.floor(stamp / 60),
    transparency: ICalEventTransparency.TRANSPARENT,
    url: home,
  });
  for (const shift of shifts) {
    calendar.createEvent({
      ...common(shift.issuedAt),
      id: `${shift.areaId}-${String(shift.from)}@shoalmark`,
      start: instant(shift.from),
      end: instant(shift.to),
      summary: `${shift.areaName}, ${shift.shift}: ${formatChance(shift.chance)} chance of shortfall (${riskWord(shift.chance)})`,
      description: describe(shift, zone, now),
      location: site.name,
      status: ICalEventStatus.TENTATIVE,
    });
  }
  const old = issuedAt === null || issuedAt < now - oldAfterSeconds;
  if (old || shifts.length === 0) {
    const today = localDate(zone.toLocal(now));
    const summary =
      issuedAt === null
        ? `${site.name}: no forecast, so this calendar knows nothing`
        : old
          ? `${site.name}: the forecast is old, do not rely on this calendar`
          : `${site.name}: no shift past its limit in the newest forecast`;
    const told =
      issuedAt === null ? 'No forecast has been issued.' : `The newest forecast was issued ${at(zone, issuedAt)}.`;
    calendar.createEvent({
      ...common(issuedAt ?? now),
      id: `state-${site.id}@shoalmark`,
      start: new Date(`${today}T00:00:00Z`),
      allDay: true,
      summary,
      description: [told, ...cautions].join('\n'),
    });
  }
  return calendar.toString();
}
