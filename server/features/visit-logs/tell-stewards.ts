import { MoreThan, type EntityManager } from 'typeorm';
import { screenFileName } from '../../../shared/domain/screen-file-name.ts';
import type { Dependencies } from '../../dependencies.ts';
import type { Site } from '../../entities/Site.ts';
import type { VisitLog } from '../../entities/VisitLog.ts';
import { Job } from '../../entities/Job.ts';
import { HttpError } from '../../errors.ts';
import type { ActorContext } from '../../http/route.ts';
import { layOutMail } from '../../mail/layout.ts';
import { enqueueMail, mailJobKind } from '../../mail/send-mail.job.ts';

/** A system that tries again every minute is told of once in this time, seconds. */
const quietFor = 6 * 3600;
const mostFaults = 20;
const sender = 'the nightly upload';

/** What of a request the mail is made of. */
type Refused = Pick<ActorContext<object>, 'deps' | 'site' | 'actor' | 'token' | 'now' | 'requestId' | 'req'>;

/**
 * Does what a site's own system asked for with its token; if it is refused, the site's stewards are told by mail. Nobody
 * looks at that system's screen at night. A person who uploads reads the refusal on the page.
 */
export async function tellIfRefused<Reply>(context: Refused, work: () => Promise<Reply>): Promise<Reply> {
  try {
    return await work();
  } catch (error) {
    if (context.token && error instanceof HttpError) {
      await tellStewards(context, error).catch((failure: unknown) => {
        context.deps.logger.error({ err: failure }, 'the stewards could not be told of a refused upload');
      });
    }
    throw error;
  }
}

async function tellStewards({ deps, site, actor, now, requestId, req }: Refused, refusal: HttpError): Promise<void> {
  const addresses = await stewardAddresses(deps.database.read, site, now);
  if (addresses.length === 0) return;
  const title = `Upload refused: ${refusal.title}`;
  const given = req.query.fileName;
  const fileName = typeof given === 'string' ? screenFileName(given, now) : null;
  const faults = refusal.faults ?? [];
  const { text, html } = layOutMail({
    title: `${site.name}: the nightly upload of visits was refused.`,
    blocks: [
      {
        heading: refusal.title,
        lines: [
          `${actor.name}${fileName === null ? '' : `, file ${fileName}`}.`,
          ...[refusal.message, refusal.kept, refusal.next].filter((line) => line !== undefined),
        ],
      },
      ...(faults.length > 0
        ? [
            {
              heading: 'What was found',
              lines: [
                ...faults.slice(0, mostFaults).map(({ at, message }) => (at === '' ? message : `${at}: ${message}`)),
                ...(faults.length > mostFaults ? [`And ${String(faults.length - mostFaults)} more.`] : []),
              ],
            },
          ]
        : []),
    ],
    link: {
      text: `Open the logs of ${site.name}`,
      url: `${deps.config.baseUrl}/sites/${encodeURIComponent(site.id)}/logs`,
    },
    footer: [
      'Until a file is accepted, forecasts go by the visits loaded before; their age is shown with every outlook.',
      `Values of the file are never repeated. Within six hours the same refusal is not told again. Reference ${requestId}.`,
    ],
  });
  await deps.database.write(async (manager) => {
    const told = await manager.existsBy(Job, {
      kind: mailJobKind,
      siteId: site.id,
      title,
      createdBy: sender,
      createdAt: MoreThan(now - quietFor),
    });
    if (told) return;
    for (const to of addresses) {
      const mail = { to, subject: `${site.name}: upload of visits refused`.slice(0, 250), text, html };
      await enqueueMail(deps, manager, { mail, title, siteId: site.id, createdBy: sender });
    }
  });
}

/**
 * Tells the site's stewards by mail, within the caller's transaction, that a file which had been accepted could not be
 * loaded: whoever sent it, person or system, was told that all was well.
 */
export async function tellLoadFailed(
  deps: Dependencies,
  manager: EntityManager,
  { log, site, error, byToken }: { log: VisitLog; site: Site; error: string; byToken: boolean },
): Promise<void> {
  const { text, html } = layOutMail({
    title: `${site.name}: a file of visits was accepted but could not be loaded.`,
    blocks: [
      {
        heading: log.fileName,
        lines: [
          `Sent by ${log.uploadedBy}${byToken ? ' (the nightly upload)' : ''}.`,
          error,
          'Nothing of it was kept; everything loaded before is unchanged.',
          'Send the file again; if it fails again, tell your administrator, who sees under jobs why.',
        ],
      },
    ],
    link: {
      text: 'Open this log',
      url: `${deps.config.baseUrl}/sites/${encodeURIComponent(site.id)}/logs/${encodeURIComponent(log.id)}`,
    },
    footer: [
      'Until a file is loaded, forecasts go by the visits loaded before; their age is shown with every outlook.',
    ],
  });
  for (const to of await stewardAddresses(manager, site, deps.clock())) {
    const subject = `${site.name}: visits not loaded`.slice(0, 250);
    const title = `Load failed: ${log.fileName}`;
    await enqueueMail(deps, manager, { mail: { to, subject, text, html }, title, siteId: site.id, createdBy: sender });
  }
}

/** Addresses of those who hold the steward's role at a site now, by name or by a group of the identity provider. */
async function stewardAddresses(
  read: EntityManager,
  site: { id: string; groupId: string },
  now: number,
): Promise<string[]> {
  const rows = await read.query<{ email: string }[]>(
    `SELECT DISTINCT person.email FROM person
     WHERE person.email <> '' AND (
       EXISTS (SELECT 1 FROM membership held WHERE held.personId = person.id AND held.role = 'steward'
         AND (held.siteId = ? OR held.groupId = ?) AND (held.endsAt IS NULL OR held.endsAt > ?))
       OR EXISTS (SELECT 1 FROM group_role held JOIN json_each(person.identityGroups) claim ON claim.value = held.claim
         WHERE held.role = 'steward' AND (held.siteId = ? OR held.groupId = ?)))
     ORDER BY person.email`,
    [site.id, site.groupId, now, site.id, site.groupId],
  );
  return rows.map(({ email }) => email);
}
