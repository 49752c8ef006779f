import type { ChangeBedsBody } from '../../../shared/api/staffed-beds.ts';
import { shiftInCharge, shiftsBetween } from '../../../shared/domain/shift-times.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { newId } from '../../database/new-id.ts';
import { readAreas, readShifts } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import { BedChange } from '../../entities/BedChange.ts';
import { badInput, notFound, type Fault } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import type { SiteContext } from '../../http/route.ts';

/** Changes the staffed beds of one area from now until the end of this shift or the next; it expires by itself. */
export async function changeBedsNow(
  deps: Dependencies,
  context: Pick<SiteContext<unknown>, 'site' | 'caller' | 'now' | 'requestId' | 'address'>,
  body: ChangeBedsBody,
): Promise<BedChange> {
  const { site, caller, now } = context;
  const { read, write } = deps.database;
  const area = (await readAreas(read, site.id)).find((candidate) => candidate.id === body.areaId);
  if (!area) throw notFound('This care area');
  const faults: Fault[] = [];
  if (body.beds + body.blocked > area.spaces) {
    faults.push({
      at: 'beds',
      message: `${area.name} has ${String(area.spaces)} bed spaces: ${String(body.beds)} staffed and ${String(body.blocked)} blocked do not fit.`,
    });
  }
  if (body.beds < area.safeMinimum) {
    faults.push({
      at: 'beds',
      message: `${area.name} is never staffed below its safe minimum of ${String(area.safeMinimum)}.`,
    });
  }
  const kind = screenNote(body.reason);
  if (kind !== null) {
    faults.push({
      at: 'reason',
      message: `The reason seems to hold ${withArticle(kind)}. Say it without anything that identifies a person.`,
    });
  }
  if (faults.length > 0) throw badInput('The change was refused.', faults);

  const shifts = shiftsBetween(makeZone(site.timeZone), await readShifts(read, site.id), now, now + 2 * 86_400);
  const current = shiftInCharge(shifts, now);
  // The overlap at handover belongs to the incoming shift, so a shift is in charge until the next one starts.
  const startAfter = (at: number) => shifts.find((shift) => shift.from > at);
  const ending = body.until === 'end of this shift' ? current : startAfter(now);
  const following = startAfter(ending && ending !== current ? ending.from : now);
  const untilAt = ending ? Math.min(ending.to, following?.from ?? ending.to) : null;
  if (untilAt === null)
    throw badInput('No shift is set for that time.', [{ at: 'until', message: 'Set the site’s shifts first.' }]);

  const change: BedChange = Object.assign(new BedChange(), {
    id: newId(),
    siteId: site.id,
    areaId: area.id,
    kind: 'change now' as const,
    fromAt: now,
    untilAt,
    beds: body.beds,
    blocked: body.blocked,
    reason: body.reason,
    madeBy: caller.person.name,
    madeAt: now,
  });
  await write(async (manager) => {
    await manager.insert(BedChange, change);
    const detail = { areaId: area.id, beds: change.beds, blocked: change.blocked, untilAt: change.untilAt };
    await recordAudit(manager, context, 'staffed-beds.changed-now', change.id, detail, change.reason);
  });
  return change;
}
