import type { Express } from 'express';
import { acknowledgeRisk as acknowledgeContract } from '../../../shared/api/acknowledgements.ts';
import { enterCensus as enterContract, getCensus } from '../../../shared/api/censuses.ts';
import { getNightLog } from '../../../shared/api/night-log.ts';
import { getOutlook, getOutlookThen, getTonight, listOutlooks, repeatOutlook } from '../../../shared/api/outlooks.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import { censusDroppedAfterSeconds, readNewestCensus } from '../../database/read-census.ts';
import { readModelParameters } from '../../database/read-model.ts';
import type { Dependencies } from '../../dependencies.ts';
import { notFound } from '../../errors.ts';
import { addActorRoute, addSiteRoute, type RouteTable } from '../../http/route.ts';
import { acknowledgeRisk } from './acknowledge-risk.ts';
import { computeOutlook } from './compute-outlook.ts';
import { enterCensus } from './enter-census.ts';
import { digestOf, type Issued, type OutlookIssuer } from './issuer.ts';
import { presentNightLog } from './night-log.ts';
import { presentOutlookThen } from './outlook-then.ts';
import { presentOutlook, readOutlook } from './present.ts';
import { readOutlookNames } from './read-outlook-names.ts';
import { presentTonight } from './tonight.ts';

/** Why saving a census brought no outlook, and what to do about it. */
const noOutlook: Record<NonNullable<Issued['reason']>, string> = {
  'no model': 'There is no outlook yet: no arrival model is in use. Have one fitted and approved.',
  'no staffed-bed plan': 'There is no outlook yet: no staffed-bed plan names every care area. Have one saved.',
  'the outlook could not be computed':
    'The outlook could not be computed from it; the last one stands. Save again in a minute, and tell your administrator if it happens again.',
};

/** Census entry, and the outlook that follows from it. */
export function addOutlookRoutes(app: Express, table: RouteTable, deps: Dependencies, issuer: OutlookIssuer): void {
  const { read } = deps.database;

  addSiteRoute(
    app,
    table,
    deps,
    getTonight,
    ({ site, now }) => presentTonight(deps, issuer, site, now),
    ({ id }) => String(issuer.computing(id)),
  );

  addSiteRoute(
    app,
    table,
    deps,
    getCensus,
    ({ site, now }) => readNewestCensus(read, site.id, now - censusDroppedAfterSeconds, now),
    () => '',
  );

  addActorRoute(app, table, deps, enterContract, async (context) => {
    const censusId = await enterCensus(deps, context, context.body);
    const issued = await issuer.issueOrReport(context.site.id, 'census saved');
    return { censusId, outlookId: issued.outlookId, reason: issued.reason && noOutlook[issued.reason] };
  });

  addSiteRoute(app, table, deps, acknowledgeContract, (context) => acknowledgeRisk(deps, context, context.body));

  addSiteRoute(app, table, deps, getNightLog, ({ site, query, now }) => presentNightLog(read, site, query.at ?? now));

  addSiteRoute(app, table, deps, listOutlooks, async ({ site, query }) => ({
    outlooks: await readOutlookNames(read, site.id, query.from, query.to),
  }));

  addSiteRoute(app, table, deps, getOutlookThen, ({ site, params, now }) =>
    presentOutlookThen(deps, site, params.outlookId, now),
  );

  addSiteRoute(app, table, deps, getOutlook, async ({ site, params }) => {
    const row = await readOutlook(read, site.id, params.outlookId);
    if (!row) throw notFound('This outlook');
    return presentOutlook(read, row);
  });

  addSiteRoute(app, table, deps, repeatOutlook, async ({ site, params }) => {
    const row = await readOutlook(read, site.id, params.outlookId);
    if (!row) throw notFound('This outlook');
    const parameters = await readModelParameters(read, row.modelId);
    const input = JSON.parse(row.input) as OutlookInput;
    const repeated = digestOf(JSON.stringify(await computeOutlook(deps.simulation, parameters, input)));
    return { sameDigits: repeated === row.digest, storedDigest: row.digest, repeatedDigest: repeated };
  });
}
