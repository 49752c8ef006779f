import { newId } from '../../database/new-id.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Person } from '../../entities/Person.ts';
import { conflict } from '../../errors.ts';
import { recordAudit, type AuditSource } from '../../http/audit.ts';
import { layOutMail } from '../../mail/layout.ts';
import { enqueueMail } from '../../mail/send-mail.job.ts';

/** Names a person by address; a mail tells them where to sign in, if a mail server is set. */
export async function invitePerson(
  deps: Dependencies,
  context: AuditSource,
  { email, name }: { email: string; name: string },
): Promise<{ person: Person; mailed: boolean }> {
  const { config, database } = deps;
  const mailed = config.smtpUrl !== null;
  const person = await database.write(async (manager) => {
    // An address that a provider has not verified proves nothing, so it does not stand in the way.
    const known = (await manager.findBy(Person, { email })).find(
      ({ issuer, emailVerified }) => issuer === null || emailVerified === 1,
    );
    if (known) {
      throw conflict(
        known.issuer === null ? 'This address was invited before.' : `${known.name} has signed in with this address.`,
        'Give the roles to the person who is there.',
      );
    }
    const created = await manager.save(
      manager.create(Person, { id: newId(), issuer: null, subject: null, name, email, createdAt: context.now }),
    );
    await recordAudit(manager, context, 'person.invited', created.id);
    if (mailed) {
      await enqueueMail(deps, manager, {
        title: 'Invitation',
        siteId: null,
        createdBy: context.caller?.person.name ?? '',
        mail: {
          to: email,
          subject: 'You can sign in to Shoalmark',
          ...layOutMail({
            title: 'You can sign in to Shoalmark with your hospital account.',
            blocks: [
              {
                heading: null,
                lines: [
                  'Shoalmark forecasts arrivals at the emergency department and says how likely tonight is to run short of staffed beds.',
                  `Sign in with the hospital account of this address (${email}); there is no other password.`,
                ],
              },
            ],
            link: { text: 'Sign in', url: `${config.baseUrl}/` },
            footer: [
              'Planning aid. Not for decisions about any individual patient.',
              `Not expected? Tell ${config.administratorContact}.`,
            ],
          }),
        },
      });
    }
    return created;
  });
  return { person, mailed };
}
