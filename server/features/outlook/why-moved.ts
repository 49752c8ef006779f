import { formatChance } from '../../../shared/domain/risk-word.ts';
import { makeZone, localParts } from '../../../shared/domain/zoned-time.ts';
import type { Outlook } from '../../../shared/api/outlooks.ts';

/**
 * One line on why an outlook moved since the one before: the area whose chance at one and the same hour
 * changed most, and what differs in what the two were computed from. Null where nothing moved by 5 points
 * or more.
 */
export function whyMoved(
  newer: Outlook,
  older: Outlook,
  areaNames: Map<string, string>,
  timeZone: string,
): string | null {
  let most: { areaId: string; hour: number; from: number; to: number } | null = null;
  for (const area of newer.result.areas) {
    const before = older.result.areas.find((candidate) => candidate.areaId === area.areaId);
    if (!before || !area.counted || !before.counted) continue;
    for (const [index, hour] of newer.result.hours.entries()) {
      const place = older.result.hours.indexOf(hour);
      if (place < 0) continue;
      const from = before.shortfall[place].chance;
      const to = area.shortfall[index].chance;
      if (most === null || Math.abs(to - from) > Math.abs(most.to - most.from))
        most = { areaId: area.areaId, hour, from, to };
    }
  }
  if (most === null || Math.abs(most.to - most.from) < 0.05) return null;
  const { areaId, hour, from, to } = most;
  const name = areaNames.get(areaId) ?? areaId;
  const local = localParts(makeZone(timeZone).toLocal(hour));
  const at = `${String(local.hour).padStart(2, '0')}:${String(local.minute).padStart(2, '0')}`;
  const reasons = differences(newer, older, areaId, name);
  return `${name} at ${at} moved from ${formatChance(from)} to ${formatChance(to)} since the last outlook: ${reasons.join(', ')}.`;
}

function differences(newer: Outlook, older: Outlook, areaId: string, name: string): string[] {
  const reasons: string[] = [];
  const countNow = newer.census.find((area) => area.areaId === areaId);
  const countBefore = older.census.find((area) => area.areaId === areaId);
  if (countNow && countBefore && JSON.stringify(countNow) !== JSON.stringify(countBefore)) {
    const changes = (['present', 'boarding'] as const)
      .filter((field) => countNow[field] !== countBefore[field])
      .map((field) => `${String(countBefore[field])} to ${String(countNow[field])} ${field}`);
    reasons.push(
      changes.length > 0 ? `${name} was counted again (${changes.join(', ')})` : `${name} was counted again`,
    );
  }
  const bedsNow = JSON.stringify(stepsFrom(newer, areaId, newer.issuedAt));
  const bedsBefore = JSON.stringify(stepsFrom(older, areaId, newer.issuedAt));
  if (bedsNow !== bedsBefore) reasons.push('its staffed beds were changed');
  if (newer.model.id !== older.model.id) reasons.push('another model is in use');
  if (newer.result.arrivalsSoFar && newer.result.arrivalsSoFar.counted !== older.result.arrivalsSoFar?.counted) {
    reasons.push('arrivals were counted');
  }
  if (reasons.length === 0) reasons.push('time has passed');
  return reasons;
}

/** Staffed beds in force from an instant on. */
function stepsFrom(outlook: Outlook, areaId: string, at: number): { at: number; beds: number }[] {
  const steps = outlook.staffedBeds.find((area) => area.areaId === areaId)?.steps ?? [];
  const end = outlook.result.hours.at(-1) ?? at;
  const current = steps.findLast((step) => step.at <= at);
  // Only what both outlooks reach to is compared.
  const later = steps.filter((step) => step.at > at && step.at < Math.min(end, at + 24 * 3600));
  return current ? [{ at, beds: current.beds }, ...later] : later;
}
