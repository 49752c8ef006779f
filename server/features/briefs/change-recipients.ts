import { domainToASCII } from 'node:url';
import type { BodyOf } from '../../../shared/api/contract.ts';
import type {
  addRecipient as addContract,
  confirmAddress as confirmContract,
  removeRecipient as removeContract,
  setSubscription as subscriptionContract,
} from '../../../shared/api/brief-recipients.ts';
import { readMailAddress } from '../../../shared/domain/mail-address.ts';
import { isGranted } from '../../../shared/domain/permission.ts';
import { newId } from '../../database/new-id.ts';
import type { Dependencies } from '../../dependencies.ts';
import { BriefRecipient } from '../../entities/BriefRecipient.ts';
import { Person } from '../../entities/Person.ts';
import { badInput, conflict, notFound, type Fault } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { readCaller } from '../../http/caller.ts';
import type { SiteContext } from '../../http/route.ts';
import { layOutMail } from '../../mail/layout.ts';
import { enqueueMail } from '../../mail/send-mail.job.ts';
import { signLink } from './signed-link.ts';

/** Control characters and line ends: what a header could be broken with. */
const unprintable = /[\p{Cc}\u2028\u2029]/u;

/** Adds a person of the site at once; asks any other address first, and sends it nothing else until it has confirmed. */
export async function addRecipient(
  deps: Dependencies,
  context: SiteContext<typeof addContract>,
): Promise<BriefRecipient> {
  const { site, now } = context;
  const { name, address } = readWish(context.body);
  const person = await personOf(deps, site.id, address, now);
  return deps.database.write(async (manager) => {
    const known = await manager.findOneBy(BriefRecipient, { siteId: site.id, address });
    if (known && known.unsubscribedAt !== null && person !== null && known.removedAt === null) {
      throw conflict(`${known.name} has unsubscribed.`, 'They can subscribe again themselves, on this page.');
    }
    if (known && known.removedAt === null && known.unsubscribedAt === null && known.confirmedAt !== null) {
      throw conflict(`${address} receives the brief already.`, 'Nothing more to do.');
    }
    const recipient = Object.assign(known ?? new BriefRecipient(), {
      id: known?.id ?? newId(),
      siteId: site.id,
      personId: person?.id ?? null,
      name: person?.name ?? name,
      address,
      addedBy: context.caller.person.name,
      addedAt: now,
      askedAt: person === null ? now : null,
      confirmedAt: person === null ? null : now,
      unsubscribedAt: null,
      removedAt: null,
      returnedAt: null,
    });
    await manager.save(recipient);
    if (person === null) await ask(deps, manager, context, recipient);
    await recordAudit(manager, context, 'brief.recipient-added', recipient.id, {
      kind: person === null ? 'outside' : 'person',
    });
    return recipient;
  });
}

function readWish({ name, address: typed }: BodyOf<typeof addContract>): { name: string; address: string } {
  const address = readMailAddress(typed);
  const faults: Fault[] = [];
  if (unprintable.test(name)) faults.push({ at: 'name', message: 'A name is one line of printable characters.' });
  else if (/[<>"]/.test(name)) faults.push({ at: 'name', message: 'A name holds no quotation marks and no < or >.' });
  if (address === null || domainToASCII(address.slice(address.lastIndexOf('@') + 1)) === '') {
    faults.push({ at: 'address', message: 'This is not one plain e-mail address, such as name@example.org.' });
  }
  if (faults.length > 0 || address === null) throw badInput('The recipient was refused.', faults);
  return { name, address };
}

/** The person of the site whose address it is, if they may read briefs here; null: an outside address. */
async function personOf(
  { database }: Dependencies,
  siteId: string,
  address: string,
  now: number,
): Promise<Person | null> {
  const person = await database.read.findOneBy(Person, { email: address.toLowerCase() });
  if (!person) return null;
  const caller = await readCaller(database.read, person.id, now);
  return isGranted(caller?.rolesAt.get(siteId) ?? [], 'brief:read') ? person : null;
}

async function ask(
  deps: Dependencies,
  manager: Parameters<typeof enqueueMail>[1],
  { site, now, caller }: Pick<SiteContext<unknown>, 'site' | 'now' | 'caller'>,
  recipient: BriefRecipient,
): Promise<void> {
  const { baseUrl, sessionSecret } = deps.config;
  const { text, html } = layOutMail({
    title: `Do you want the weekly brief of ${site.name}?`,
    blocks: [
      {
        heading: null,
        lines: [
          `${caller.person.name} entered this address as a recipient of the weekly brief of the emergency department of ${site.name}: the arrivals and staffed beds of the week ahead, and the last week in hindsight.`,
          'Nothing else is sent to you unless you confirm. If you do not know what this is, do nothing.',
        ],
      },
    ],
    link: {
      text: 'Look at the question and answer it',
      url: `${baseUrl}/mail/confirm/${signLink(sessionSecret, 'confirm', recipient.id, now)}`,
    },
    footer: ['The link works for 14 days. Opening it alone changes nothing.'],
  });
  await enqueueMail(deps, manager, {
    mail: { to: recipient.address, subject: `Weekly brief of ${site.name}: do you want it?`.slice(0, 250), text, html },
    title: 'Ask an outside address whether it wants the weekly brief',
    siteId: site.id,
    createdBy: caller.person.name,
  });
}

/** Removes a recipient: a brief on its way passes them over. */
export async function removeRecipient(
  { database }: Dependencies,
  context: SiteContext<typeof removeContract>,
): Promise<void> {
  const { recipientId } = context.params;
  await database.write(async (manager) => {
    const where = { id: recipientId, siteId: context.site.id };
    const recipient = await manager.findOneBy(BriefRecipient, where);
    if (!recipient || recipient.removedAt !== null) throw notFound('This recipient');
    await manager.update(BriefRecipient, where, { removedAt: context.now });
    await recordAudit(manager, context, 'brief.recipient-removed', recipientId);
  });
}

/** Takes an address whose mail came back into use again. */
export function confirmAddress(
  { database }: Dependencies,
  context: SiteContext<typeof confirmContract>,
): Promise<BriefRecipient> {
  const { recipientId } = context.params;
  return database.write(async (manager) => {
    const recipient = await manager.findOneBy(BriefRecipient, { id: recipientId, siteId: context.site.id });
    if (!recipient || recipient.removedAt !== null) throw notFound('This recipient');
    if (recipient.returnedAt === null) throw conflict('No mail to this address has come back.', 'Nothing more to do.');
    await manager.update(BriefRecipient, { id: recipientId }, { returnedAt: null });
    await recordAudit(manager, context, 'brief.address-confirmed', recipientId);
    return Object.assign(recipient, { returnedAt: null });
  });
}

/** Own subscription of whoever asks. */
export async function setSubscription(
  { database }: Dependencies,
  context: SiteContext<typeof subscriptionContract>,
): Promise<{ subscribed: boolean; address: string }> {
  const { caller, site, now, body } = context;
  const address = readMailAddress(caller.person.email);
  if (address === null) {
    throw badInput(
      'Your account has no usable e-mail address.',
      [],
      'Ask the administrator to have it mended in the hospital’s directory.',
    );
  }
  await database.write(async (manager) => {
    const known = await manager.findOneBy(BriefRecipient, { siteId: site.id, address });
    const subscribed =
      known !== null && known.removedAt === null && known.unsubscribedAt === null && known.confirmedAt !== null;
    if (subscribed === body.subscribed) return;
    const own = { personId: caller.person.id, name: caller.person.name };
    if (!body.subscribed) await manager.update(BriefRecipient, { id: known?.id }, { unsubscribedAt: now });
    else {
      const fresh = { ...own, addedBy: caller.person.name, addedAt: now, askedAt: null, confirmedAt: now };
      await manager.save(
        Object.assign(known ?? new BriefRecipient(), {
          id: known?.id ?? newId(),
          siteId: site.id,
          address,
          ...fresh,
          unsubscribedAt: null,
          removedAt: null,
          returnedAt: null,
        }),
      );
    }
    await recordAudit(manager, context, body.subscribed ? 'brief.subscribed' : 'brief.unsubscribed', site.id);
  });
  return { subscribed: body.subscribed, address };
}
