import { AlertSent } from '../entities/AlertSent.ts';
import { Acknowledgement } from '../entities/Acknowledgement.ts';
import { ArrivalModelRow } from '../entities/ArrivalModelRow.ts';
import { AuditEvent } from '../entities/AuditEvent.ts';
import { BedChange } from '../entities/BedChange.ts';
import { CalendarEntry } from '../entities/CalendarEntry.ts';
import { CareArea } from '../entities/CareArea.ts';
import { Census } from '../entities/Census.ts';
import { CensusArea } from '../entities/CensusArea.ts';
import { ExposureGapRow } from '../entities/ExposureGapRow.ts';
import { HealthGroup } from '../entities/HealthGroup.ts';
import { Job } from '../entities/Job.ts';
import { MachineToken } from '../entities/MachineToken.ts';
import { Membership } from '../entities/Membership.ts';
import { OutlookRow } from '../entities/OutlookRow.ts';
import { Person } from '../entities/Person.ts';
import { SessionRow } from '../entities/SessionRow.ts';
import { Shift } from '../entities/Shift.ts';
import { Site } from '../entities/Site.ts';
import { StaffedBedPlan } from '../entities/StaffedBedPlan.ts';
import { StaffedBedPlanArea } from '../entities/StaffedBedPlanArea.ts';
import { Visit } from '../entities/Visit.ts';
import { VisitLog } from '../entities/VisitLog.ts';
import { VisitLogMapping } from '../entities/VisitLogMapping.ts';

/** Every entity, listed by hand: no globs, so that the build and the tests load the same. */
export const entities = [
  Acknowledgement,
  AlertSent,
  ArrivalModelRow,
  AuditEvent,
  BedChange,
  CalendarEntry,
  CareArea,
  Census,
  CensusArea,
  ExposureGapRow,
  HealthGroup,
  Job,
  MachineToken,
  Membership,
  OutlookRow,
  Person,
  SessionRow,
  Shift,
  Site,
  StaffedBedPlan,
  StaffedBedPlanArea,
  Visit,
  VisitLog,
  VisitLogMapping,
];
