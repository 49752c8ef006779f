import { AlertSent } from '../entities/AlertSent.ts';
import { Acknowledgement } from '../entities/Acknowledgement.ts';
import { ArrivalModelRow } from '../entities/ArrivalModelRow.ts';
import { AuditEvent } from '../entities/AuditEvent.ts';
import { AuditNote } from '../entities/AuditNote.ts';
import { BedChange } from '../entities/BedChange.ts';
import { Brief } from '../entities/Brief.ts';
import { BriefDelivery } from '../entities/BriefDelivery.ts';
import { BriefRecipient } from '../entities/BriefRecipient.ts';
import { BriefSettings } from '../entities/BriefSettings.ts';
import { CalendarEntry } from '../entities/CalendarEntry.ts';
import { CalendarFeed } from '../entities/CalendarFeed.ts';
import { CareArea } from '../entities/CareArea.ts';
import { Census } from '../entities/Census.ts';
import { CensusArea } from '../entities/CensusArea.ts';
import { ExposureGapRow } from '../entities/ExposureGapRow.ts';
import { GroupRole } from '../entities/GroupRole.ts';
import { ForecastScore } from '../entities/ForecastScore.ts';
import { HealthGroup } from '../entities/HealthGroup.ts';
import { HourlyCountRow } from '../entities/HourlyCountRow.ts';
import { Job } from '../entities/Job.ts';
import { MachineToken } from '../entities/MachineToken.ts';
import { Membership } from '../entities/Membership.ts';
import { ModelComparisonRow } from '../entities/ModelComparisonRow.ts';
import { OutlookLawsRow } from '../entities/OutlookLawsRow.ts';
import { OutlookRow } from '../entities/OutlookRow.ts';
import { Person } from '../entities/Person.ts';
import { ScoreWeek } from '../entities/ScoreWeek.ts';
import { Scenario } from '../entities/Scenario.ts';
import { SessionRow } from '../entities/SessionRow.ts';
import { SettingChange } from '../entities/SettingChange.ts';
import { Shift } from '../entities/Shift.ts';
import { Site } from '../entities/Site.ts';
import { StaffedBedPlan } from '../entities/StaffedBedPlan.ts';
import { StaffedBedPlanArea } from '../entities/StaffedBedPlanArea.ts';
import { Visit } from '../entities/Visit.ts';
import { VisitLog } from '../entities/VisitLog.ts';
import { VisitLogMapping } from '../entities/VisitLogMapping.ts';
import { WeekOutlookLawsRow } from '../entities/WeekOutlookLawsRow.ts';
import { WeekOutlookRow } from '../entities/WeekOutlookRow.ts';

/** Every entity, listed by hand: no globs, so that the build and the tests load the same. */
export const entities = [
  Acknowledgement,
  AlertSent,
  ArrivalModelRow,
  AuditEvent,
  AuditNote,
  BedChange,
  Brief,
  BriefDelivery,
  BriefRecipient,
  BriefSettings,
  CalendarEntry,
  CalendarFeed,
  CareArea,
  Census,
  CensusArea,
  ExposureGapRow,
  ForecastScore,
  GroupRole,
  HealthGroup,
  HourlyCountRow,
  Job,
  MachineToken,
  Membership,
  ModelComparisonRow,
  OutlookLawsRow,
  OutlookRow,
  Person,
  ScoreWeek,
  Scenario,
  SessionRow,
  SettingChange,
  Shift,
  Site,
  StaffedBedPlan,
  StaffedBedPlanArea,
  Visit,
  VisitLog,
  VisitLogMapping,
  WeekOutlookLawsRow,
  WeekOutlookRow,
];
