import { createHash, timingSafeEqual } from 'node:crypto';
import express, { type Express } from 'express';
import { takeDeliveryReport as contract } from '../../../shared/api/mail-links.ts';
import type { Dependencies } from '../../dependencies.ts';
import { HttpError, notFound } from '../../errors.ts';
import { addRoute, type RouteTable } from '../../http/route.ts';
import { takeDeliveryReport } from './take-delivery-report.ts';

/** A report with the whole brief in it is far smaller. */
const largest = '2mb';

const digest = (text: string) => createHash('sha256').update(text).digest();

/** Takes what came back to the address that mail is sent from, from the mail server's pipe; needs no session, but the token. */
export function addDeliveryReportRoute(app: Express, table: RouteTable, deps: Dependencies): void {
  const { deliveryReportToken } = deps.config;
  const expected = deliveryReportToken === null ? null : digest(deliveryReportToken);
  const refuse = (authorization: string | undefined) => {
    if (expected === null) return notFound('This address');
    const given = /^bearer +(.*?) *$/i.exec(authorization ?? '')?.[1] ?? '';
    if (timingSafeEqual(digest(given), expected)) return null;
    return new HttpError(401, 'Token refused', 'Delivery reports need the token that DELIVERY_REPORT_TOKEN names.', {
      kept: 'Nothing was stored.',
      next: 'Send it as Authorization: Bearer.',
    });
  };
  // Who may not is answered before a byte of the message is read.
  app.post(contract.path, (req, res, next) => {
    const refused = refuse(req.headers.authorization);
    if (refused?.status === 401) res.setHeader('www-authenticate', 'Bearer');
    next(refused ?? undefined);
  });
  app.post(contract.path, express.raw({ type: 'message/rfc822', limit: largest }));
  addRoute(app, table, deps, contract, async ({ req }) => {
    const raw: unknown = req.body;
    if (!Buffer.isBuffer(raw) || raw.length === 0) {
      throw new HttpError(415, 'Input refused', 'The request must be one whole message, as message/rfc822.', {
        kept: 'Nothing was stored.',
        next: 'Send the message as it came, with the header content-type: message/rfc822.',
      });
    }
    return { outcome: await takeDeliveryReport(deps, raw) };
  });
}
