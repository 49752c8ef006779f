import type { Express } from 'express';
import { enterCensus as enterContract, getCensus } from '../../../shared/api/censuses.ts';
import { getOutlook, getTonight, repeatOutlook } from '../../../shared/api/outlooks.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import { censusDroppedAfterSeconds, readNewestCensus } from '../../database/read-census.ts';
import { readModelParameters } from '../../database/read-model.ts';
import type { Dependencies } from '../../dependencies.ts';
import { notFound } from '../../errors.ts';
import { addSiteRoute, type RouteTable } from '../../http/route.ts';
import { computeOutlook } from './compute-outlook.ts';
import { enterCensus } from './enter-census.ts';
import { digestOf, type OutlookIssuer } from './issuer.ts';
import { presentOutlook, readOutlook } from './present.ts';
import { presentTonight } from './tonight.ts';

/** Census entry, and the outlook that follows from it. */
export function addOutlookRoutes(app: Express, table: RouteTable, deps: Dependencies, issuer: OutlookIssuer): void {
  const { read } = deps.database;

  addSiteRoute(app, table, deps, getTonight, ({ site, now }) => presentTonight(deps, issuer, site, now));

  addSiteRoute(app, table, deps, getCensus, ({ site, now }) =>
    readNewestCensus(read, site.id, now - censusDroppedAfterSeconds, now),
  );

  addSiteRoute(app, table, deps, enterContract, async (context) => {
    const censusId = await enterCensus(deps, context, context.body);
    const issued = await issuer.issueOrReport(context.site.id, 'census saved');
    return { censusId, outlookId: issued.outlookId, reason: issued.reason };
  });

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
