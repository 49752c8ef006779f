import type { Express, Response } from 'express';
import rateLimit from 'express-rate-limit';
import * as api from '../../../shared/api/mail-links.ts';
import type { Dependencies } from '../../dependencies.ts';
import { BriefRecipient } from '../../entities/BriefRecipient.ts';
import { HttpError } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { addRoute, type RouteContext, type RouteTable } from '../../http/route.ts';
import { nonceOf } from '../../http/security-headers.ts';
import { linkPage } from './link-pages.ts';
import { confirmSeconds, readLink, type LinkPurpose } from './signed-link.ts';

type Words = Pick<Parameters<typeof linkPage>[0], 'title' | 'lines' | 'button'>;
type LinkContext = RouteContext<typeof api.unsubscribe>;

/**
 * What links of mails lead to. They need no session: the link is signed. A GET only shows a page, because mail scanners follow
 * links; a POST does it, from the page's button or from the mail program (RFC 8058), and needs no anti-forgery token: whoever
 * has the link may use it.
 */
export function addLinkRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  app.use(
    '/mail',
    rateLimit({
      windowMs: 60_000,
      limit: 300,
      standardHeaders: 'draft-8',
      legacyHeaders: false,
      validate: { xForwardedForHeader: false },
      handler: (_req, _res, next) => {
        next(
          new HttpError(429, 'Too many requests', 'Too many links were followed from this address within a minute.', {
            next: 'Wait a minute and try again.',
          }),
        );
      },
    }),
  );

  const answer = (
    contract: typeof api.unsubscribe,
    purpose: LinkPurpose,
    act: (recipient: BriefRecipient, context: LinkContext) => Promise<Words> | Words,
  ) => {
    addRoute(app, table, deps, contract, async (context) => {
      const recipient = await find(deps, context, purpose);
      if (recipient) show(context.res, await act(recipient, context));
      else show(context.res.status(404), invalid);
      return undefined;
    });
  };

  answer(api.showConfirmation, 'confirm', (recipient) =>
    recipient.confirmedAt !== null && recipient.unsubscribedAt === null
      ? confirmed(recipient)
      : {
          title: `Do you want the weekly brief of ${recipient.site.name}?`,
          lines: [`It would go to ${recipient.address} once a week. You can end it with one press in every brief.`],
          button: 'Yes, send it to me',
        },
  );

  answer(api.confirmRecipient, 'confirm', async (recipient, context) => {
    if (recipient.confirmedAt === null) {
      await deps.database.write(async (manager) => {
        await manager.update(BriefRecipient, { id: recipient.id }, { confirmedAt: context.now });
        await recordAudit(manager, { ...context, site: recipient.site }, 'brief.recipient-confirmed', recipient.id);
      });
    }
    return confirmed(recipient);
  });

  answer(api.showUnsubscribe, 'unsubscribe', (recipient) =>
    isOff(recipient)
      ? unsubscribed(recipient)
      : {
          title: `Stop the weekly brief of ${recipient.site.name}?`,
          lines: [`It goes to ${recipient.address}. Nothing has changed yet.`],
          button: 'Unsubscribe',
        },
  );

  answer(api.unsubscribe, 'unsubscribe', async (recipient, context) => {
    if (!isOff(recipient)) {
      await deps.database.write(async (manager) => {
        await manager.update(BriefRecipient, { id: recipient.id }, { unsubscribedAt: context.now });
        const by = { by: 'link' };
        await recordAudit(manager, { ...context, site: recipient.site }, 'brief.unsubscribed', recipient.id, by);
      });
    }
    return unsubscribed(recipient);
  });
}

function isOff({ unsubscribedAt, removedAt }: BriefRecipient): boolean {
  return unsubscribedAt !== null || removedAt !== null;
}

async function find(
  { config, database }: Dependencies,
  { params, now }: LinkContext,
  purpose: LinkPurpose,
): Promise<BriefRecipient | null> {
  const link = readLink(config.sessionSecret, purpose, params.link);
  if (!link || (purpose === 'confirm' && link.at + confirmSeconds < now)) return null;
  const recipient = await database.read.findOne(BriefRecipient, {
    where: { id: link.recipientId },
    relations: { site: true },
  });
  if (!recipient) return null;
  // A question that was asked again, or taken back, is answered by the newest link alone.
  if (purpose === 'confirm' && (recipient.removedAt !== null || recipient.askedAt !== link.at)) return null;
  return recipient;
}

const confirmed = ({ site, address }: BriefRecipient): Words => ({
  title: 'Confirmed',
  lines: [`The weekly brief of ${site.name} goes to ${address} from now on. Every brief has a link that ends it.`],
  button: null,
});

const unsubscribed = ({ site, address }: BriefRecipient): Words => ({
  title: 'Unsubscribed',
  lines: [
    `No more weekly briefs of ${site.name} go to ${address}.`,
    'To have it again, ask whoever plans the beds there.',
  ],
  button: null,
});

const invalid: Words = {
  title: 'This link is not valid',
  lines: [
    'It was cut off, has run out, or was replaced by a newer one. Nothing was changed.',
    'Open the newest message and follow its link as it stands there.',
  ],
  button: null,
};

function show(res: Response, words: Words): void {
  res
    .setHeader('cache-control', 'no-store')
    .type('html')
    .send(linkPage({ ...words, nonce: nonceOf(res) }));
}
