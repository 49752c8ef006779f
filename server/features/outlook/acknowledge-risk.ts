import type { AcknowledgeBody, Acknowledgement as Reply } from '../../../shared/api/acknowledgements.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import type { OutlookResult } from '../../../shared/forecasting/outlook-types.ts';
import { hoursPastLimit } from '../../../shared/forecasting/hours-past-limit.ts';
import { newId } from '../../database/new-id.ts';
import { readAreas } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Acknowledgement } from '../../entities/Acknowledgement.ts';
import { badInput, conflict, notFound } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import type { SiteContext } from '../../http/route.ts';
import { presentAcknowledgement } from './read-acknowledgements.ts';
import { readOutlook } from './present.ts';

/** Stores that somebody saw an area pass its limit tonight, for the hours of the outlook that they looked at. */
export async function acknowledgeRisk(
  deps: Dependencies,
  context: Pick<SiteContext<unknown>, 'site' | 'caller' | 'now' | 'requestId' | 'address'>,
  body: AcknowledgeBody,
): Promise<Reply> {
  const { site, caller, now } = context;
  const { read, write } = deps.database;
  const area = (await readAreas(read, site.id)).find((candidate) => candidate.id === body.areaId);
  if (!area) throw notFound('This care area');
  const row = await readOutlook(read, site.id, body.outlookId);
  if (!row) throw notFound('This outlook');
  const kind = screenNote(body.note);
  if (kind !== null) {
    throw badInput('The note was refused.', [
      {
        at: 'note',
        message: `The note seems to hold ${withArticle(kind)}. Say it without anything that identifies a person.`,
      },
    ]);
  }
  const result = JSON.parse(row.result) as OutlookResult;
  const hours = hoursPastLimit(result, area.id, area, now, makeZone(site.timeZone));
  if (hours.length === 0) {
    throw conflict(
      `${area.name} is past its limit at no hour of tonight that is still to come.`,
      'Look at the newest outlook: there may be nothing to acknowledge any more.',
    );
  }
  const acknowledgement = Object.assign(new Acknowledgement(), {
    id: newId(),
    siteId: site.id,
    areaId: area.id,
    outlookId: row.id,
    fromAt: hours[0],
    untilAt: hours[hours.length - 1],
    hours: JSON.stringify(hours),
    note: body.note,
    by: caller.person.name,
    at: now,
  });
  await write(async (manager) => {
    await manager.insert(Acknowledgement, acknowledgement);
    const detail = { areaId: area.id, outlookId: row.id, hours: hours.length };
    await recordAudit(manager, context, 'risk.acknowledged', acknowledgement.id, detail, body.note);
  });
  return presentAcknowledgement(acknowledgement);
}
