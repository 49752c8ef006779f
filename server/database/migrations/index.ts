import { Initial1796104800519 } from './1796104800519-Initial.ts';
import { VisitLogMemory1796107539421 } from './1796107539421-VisitLogMemory.ts';
import { TokensAndAlerts1796108003403 } from './1796108003403-TokensAndAlerts.ts';
import { Acknowledgement1796108180497 } from './1796108180497-Acknowledgement.ts';
import { VisitArrivalIndex1796114000000 } from './1796114000000-VisitArrivalIndex.ts';
import { WeekOutlook1796115000001 } from './1796115000001-WeekOutlook.ts';
import { SiteSettings1796115000002 } from './1796115000002-SiteSettings.ts';
import { Plans1796115000003 } from './1796115000003-Plans.ts';
import { Briefs1796115000004 } from './1796115000004-Briefs.ts';
import { TrackRecord1796115000005 } from './1796115000005-TrackRecord.ts';
import { Administration1796115000006 } from './1796115000006-Administration.ts';
import { LogFormats1796115000007 } from './1796115000007-LogFormats.ts';
import { HourlyCounts1796116000001 } from './1796116000001-HourlyCounts.ts';
import { ReturnedBriefs1796116000002 } from './1796116000002-ReturnedBriefs.ts';
import { AdoptedAs1796116000003 } from './1796116000003-AdoptedAs.ts';
import { TrackRecordAhead1796116000004 } from './1796116000004-TrackRecordAhead.ts';

/** In order of their dates. */
export const migrations = [
  Initial1796104800519,
  VisitLogMemory1796107539421,
  TokensAndAlerts1796108003403,
  Acknowledgement1796108180497,
  VisitArrivalIndex1796114000000,
  WeekOutlook1796115000001,
  SiteSettings1796115000002,
  Plans1796115000003,
  Briefs1796115000004,
  TrackRecord1796115000005,
  Administration1796115000006,
  LogFormats1796115000007,
  HourlyCounts1796116000001,
  ReturnedBriefs1796116000002,
  AdoptedAs1796116000003,
  TrackRecordAhead1796116000004,
];
