import type { EntityManager } from 'typeorm';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { alertSpan, decideAlert, type LastAlert } from '../../../shared/forecasting/outlook-alert.ts';
import type { OutlookInput, OutlookResult } from '../../../shared/forecasting/outlook-types.ts';
import { newId } from '../../database/new-id.ts';
import { readAreas } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import { AlertSent } from '../../entities/AlertSent.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { OutlookRow } from '../../entities/OutlookRow.ts';
import { Site } from '../../entities/Site.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import { enqueueMail } from '../../mail/send-mail.job.ts';
import { writeAlertMail, type AlertedArea } from './alert-mail.ts';

/** An outlook that was issued longer ago tells nobody anything new, seconds. */
const oldSeconds = 1800;

/**
 * After an outlook was issued: queues one alert mail for all areas that have newly passed their limit, or none. What was
 * sent and what is queued are written together, so that an outlook handed in twice, or after a crash, is told of once; an
 * alert that was missed is made up for by the next outlook.
 * @returns the job that sends the mail; null if there is nothing to tell, or nobody to tell it to
 */
export async function afterOutlook(deps: Dependencies, outlookId: string): Promise<string | null> {
  const { read, write } = deps.database;
  const row = await read.findOne(OutlookRow, {
    where: { id: outlookId },
    select: { id: true, siteId: true, issuedAt: true, modelId: true, input: true, result: true },
  });
  if (!row || row.issuedAt < deps.clock() - oldSeconds) return null;
  const site = await read.findOneByOrFail(Site, { id: row.siteId });
  if (site.onCallAddress === null) return null;
  const model = await read.findOneByOrFail(ArrivalModelRow, { id: row.modelId });
  const areas = await readAreas(read, site.id);
  const input = JSON.parse(row.input) as OutlookInput;
  const result = JSON.parse(row.result) as OutlookResult;
  const { shiftFrom } = alertSpan(input.shifts, row.issuedAt);

  return write(async (manager) => {
    // Read again where nobody else writes: the address may have been taken away meanwhile.
    const to = (await manager.findOneByOrFail(Site, { id: site.id })).onCallAddress;
    if (to === null) return null;
    const alerted: AlertedArea[] = [];
    for (const area of areas) {
      const outlook = result.areas.find(({ areaId }) => areaId === area.id);
      const given = input.areas.find(({ areaId }) => areaId === area.id);
      if (!outlook || !given) continue;
      const newest = await newestAlert(manager, site.id, area.id);
      if (newest && newest.sentAt > row.issuedAt) continue;
      const { spaces, alertLimit } = given;
      const decision = decideAlert({
        area: outlook,
        spaces,
        alertLimit,
        hours: result.hours,
        issuedAt: row.issuedAt,
        shifts: input.shifts,
        last: newest && lastOf(newest),
      });
      if (decision.rearm && newest) await manager.update(AlertSent, { id: newest.id }, { rearmedAt: row.issuedAt });
      if (decision.send) {
        const { name, spaceKind } = area;
        alerted.push({ name, spaceKind, spaces, alertLimit, census: given.census, outlook, decision });
      }
    }
    if (alerted.length === 0) return null;
    const { subject, text, html, lastHour } = writeAlertMail({
      site,
      zone: makeZone(site.timeZone),
      issuedAt: row.issuedAt,
      modelFittedAt: model.fittedAt,
      hours: result.hours,
      alerted,
      uncounted: areas.filter(({ id }) => result.areas.some((one) => one.areaId === id && !one.counted)),
      baseUrl: deps.config.baseUrl,
    });
    const jobId = await enqueueMail(deps, manager, {
      mail: { to, subject, text, html },
      title: `Alert to the on-call address: ${alerted.map(({ name }) => name).join(', ')}`,
      siteId: site.id,
      createdBy: 'the alert',
      // Once the last hour past its limit is over there is nothing left to warn of.
      notAfter: lastHour,
    });
    for (const { outlook, alertLimit, decision } of alerted) {
      await manager.insert(AlertSent, {
        id: newId(),
        siteId: site.id,
        areaId: outlook.areaId,
        outlookId: row.id,
        sentAt: row.issuedAt,
        shiftFrom,
        chance: decision.chance,
        alertLimit,
        rearmedAt: null,
        jobId,
      });
    }
    await recordOwnAudit(manager, {
      at: deps.clock(),
      actor: 'the alert',
      siteId: site.id,
      event: 'alert.queued',
      subject: row.id,
      detail: { areas: alerted.map(({ name }) => name), jobId },
    });
    return jobId;
  });
}

function newestAlert(manager: EntityManager, siteId: string, areaId: string): Promise<AlertSent | null> {
  return manager.findOne(AlertSent, { where: { siteId, areaId }, order: { sentAt: 'DESC' } });
}

function lastOf({ shiftFrom, rearmedAt }: AlertSent): LastAlert {
  return { shiftFrom, rearmed: rearmedAt !== null };
}
