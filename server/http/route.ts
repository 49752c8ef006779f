import type { Express, Request, Response } from 'express';
import type { z } from 'zod';
import type { BodyOf, Contract, ParamsOf, QueryOf, ReplyOf } from '../../shared/api/contract.ts';
import { badInput, HttpError, type Fault } from '../errors.ts';
import type { Dependencies } from '../dependencies.ts';
import type { MachineToken } from '../entities/MachineToken.ts';
import type { Site } from '../entities/Site.ts';
import { actorOf, type Actor } from './actor.ts';
import { authorize } from './authorize.ts';
import type { Caller } from './caller.ts';
import { SharedReplies } from './shared-replies.ts';

/** What a handler is given. Everything in it is checked. */
export interface RouteContext<C = unknown> {
  deps: Dependencies;
  params: ParamsOf<C>;
  query: QueryOf<C>;
  body: BodyOf<C>;
  /** Who asks; null only on public routes, and where a machine token asks. */
  caller: Caller | null;
  /** The machine token that asks instead of a person. */
  token: MachineToken | null;
  /** The site of `:siteId`; the caller holds the route's permission there. */
  site: Site | null;
  /** UTC seconds at the start of the request. */
  now: number;
  requestId: string;
  address: string;
  req: Request;
  res: Response;
}

/** A context on a route of a site for a signed-in person: the common case. */
export type SiteContext<C> = RouteContext<C> & { caller: Caller; site: Site };

/** A context on a route of a site that a person or a machine token may call. */
export type ActorContext<C> = RouteContext<C> & { actor: Actor; site: Site };

/** Either sends the reply itself (returns undefined) or returns what the contract's reply schema holds. */
type Handler<C> = (context: RouteContext<C>) => Promise<ReplyOf<C> | undefined>;

/**
 * On a route whose reply is the same for everybody who may ask: what it depends on besides database, clock and query.
 * Such a reply is made once for all who ask within the same second.
 */
type SharedBy = (site: Site) => string;

/** Every registered contract, for the API description and for the test that tries every route. */
export interface RouteTable {
  contracts: Contract[];
}

/**
 * Puts a contract's route into the application: authorise, check, handle, check the reply. A rejection
 * goes to the error handler (Express 5). A reply that breaks its own contract is our fault: 500.
 */
export function addRoute<C extends Contract>(
  app: Express,
  table: RouteTable,
  deps: Dependencies,
  contract: C,
  handler: Handler<C>,
  sharedBy?: SharedBy,
): void {
  table.contracts.push(contract);
  const shared = new SharedReplies(deps.database.writes);
  app[contract.method](contract.path, async (req, res) => {
    const now = deps.clock();
    const { caller, site, token } = await authorize(deps, req, contract, now);
    const params = check(contract.params, req.params, 'address');
    const query = check(contract.query, req.query, 'query');
    if (contract.body && !req.is('application/json')) {
      throw new HttpError(415, 'Input refused', 'The request must be application/json.', {
        kept: 'Nothing was stored.',
        next: 'Send JSON with the header content-type: application/json.',
      });
    }
    const body = check(contract.body, req.body, 'body');
    const context = {
      deps,
      params: params as ParamsOf<C>,
      query: query as QueryOf<C>,
      body: body as BodyOf<C>,
      caller,
      token,
      site,
      now,
      requestId: requestIdOf(req),
      address: req.ip ?? '',
      req,
      res,
    };
    if (sharedBy && site) {
      const key = `${site.id} ${JSON.stringify(query)}`;
      const make = async () => JSON.stringify(contract.reply.parse(await handler(context)));
      const text = await shared.of(key, now, sharedBy(site), make);
      res.setHeader('cache-control', 'no-store');
      res
        .status(contract.status ?? 200)
        .type('application/json')
        .send(text);
      return;
    }
    const reply = await handler(context);
    if (res.headersSent || res.writableEnded) return;
    const status = contract.status ?? 200;
    res.setHeader('cache-control', 'no-store');
    if (status === 204) res.status(204).end();
    else res.status(status).json(contract.reply.parse(reply));
  });
}

/** Adds routes of a site: the handler's caller and site are there. */
export function addSiteRoute<C extends Contract>(
  app: Express,
  table: RouteTable,
  deps: Dependencies,
  contract: C,
  handler: (context: SiteContext<C>) => Promise<ReplyOf<C> | undefined>,
  sharedBy?: SharedBy,
): void {
  if (!contract.path.startsWith('/api/sites/:siteId')) throw new RangeError(`${contract.path} is not a path of a site`);
  const forSite: Handler<C> = (context) => {
    const { caller, site } = context;
    if (!caller || !site) throw new Error('a route of a site was reached without a caller');
    return handler({ ...context, caller, site });
  };
  addRoute(app, table, deps, contract, forSite, sharedBy);
}

/** Adds routes of a site that its own systems may call too, with a machine token: the handler is told who acts. */
export function addActorRoute<C extends Contract>(
  app: Express,
  table: RouteTable,
  deps: Dependencies,
  contract: C,
  handler: (context: ActorContext<C>) => Promise<ReplyOf<C> | undefined>,
): void {
  if (!contract.path.startsWith('/api/sites/:siteId')) throw new RangeError(`${contract.path} is not a path of a site`);
  addRoute(app, table, deps, contract, (context) => {
    const { site } = context;
    const actor = actorOf(context);
    if (!actor || !site) throw new Error('a route of a site was reached by nobody');
    return handler({ ...context, actor, site });
  });
}

/** The id that this request carries in the log and in its answer. */
export function requestIdOf(req: Request): string {
  return typeof req.id === 'string' ? req.id : '';
}

function check(schema: z.ZodType | undefined, value: unknown, where: string): unknown {
  if (!schema) return undefined;
  const parsed = schema.safeParse(value ?? {});
  if (parsed.success) return parsed.data;
  const faults: Fault[] = parsed.error.issues.slice(0, 100).map((issue) => ({
    at: issue.path.length > 0 ? issue.path.join('.') : where,
    message: issue.message,
  }));
  throw badInput(`${String(faults.length)} ${faults.length === 1 ? 'fault' : 'faults'} in the ${where}.`, faults);
}
