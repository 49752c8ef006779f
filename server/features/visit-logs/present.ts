import type { VisitLogCheck, VisitLogDetail, VisitLogSummary } from '../../../shared/api/visit-logs.ts';
import { visitLogLimits } from '../../../shared/api/visit-logs.ts';
import { acceptingChange } from '../../../shared/domain/accepting-change.ts';
import type { FileStudy } from '../../../shared/domain/file-study.ts';
import type { Span } from '../../database/counting-spans.ts';
import type { CareArea } from '../../entities/CareArea.ts';
import type { VisitLog } from '../../entities/VisitLog.ts';
import type { CheckedFile } from './checked-file.ts';
import { periodOf } from '../../../shared/domain/log-period.ts';

/** A log as the list shows it. @param counts the spans of its period that count; see database/counting-spans */
export function presentVisitLog(log: VisitLog, counts: readonly Span[]): VisitLogSummary {
  return {
    id: log.id,
    kind: log.kind,
    status: log.status,
    fileName: log.fileName,
    rows: log.rows,
    period: { from: log.statedFrom ?? log.periodFrom, to: log.periodTo },
    purgedTo: log.statedFrom === null ? null : log.status === 'purged' ? log.periodTo : log.periodFrom,
    counts: log.status === 'ready' ? [...counts] : [],
    leftOutRows: log.problems.rows,
    uploadedBy: log.uploadedBy,
    uploadedAt: log.uploadedAt,
    readyAt: log.readyAt,
    withdrawnBy: log.withdrawnBy,
    withdrawnAt: log.withdrawnAt,
    reason: log.reason,
    jobId: log.jobId,
  };
}

/** A log as its own page shows it: still no visit. */
export function presentVisitLogDetail(
  log: VisitLog,
  counts: readonly Span[],
  areas: readonly CareArea[],
): VisitLogDetail {
  return {
    ...presentVisitLog(log, counts),
    sha256: log.sha256,
    facts: {
      selectedBy: log.selectedBy,
      takenAt: log.takenAt,
      missingDeparture: log.missingDeparture,
      arrivalMeaning: log.arrivalMeaning,
      areaMeaning: log.areaMeaning,
    },
    statedStays: log.statedStays && {
      source: log.statedStays.source,
      areas: log.statedStays.areas.flatMap(({ areaCode, meanHours }) => {
        const area = areas.find(({ code }) => code === areaCode);
        return area ? [{ areaId: area.id, name: area.name, meanHours }] : [];
      }),
    },
    leftOut: log.problems.kinds.map(({ kind, rows }) => ({ problem: kind, rows })),
    visitsByArea: presentAreas(
      log.visitsByArea.map(({ areaCode, visits }) => ({ area: areaCode, visits })),
      areas,
    ),
  };
}

/** What the check found. @param logs those that count now. @param now UTC seconds */
export function presentCheck(
  checked: CheckedFile,
  study: FileStudy | null,
  logs: readonly { id: string; kind: VisitLog['kind']; counts: readonly Span[] }[],
  areas: readonly CareArea[],
  timeZone: string,
  now: number,
): VisitLogCheck {
  const { report } = checked;
  const period = periodOf(report, timeZone, now);
  return {
    checkId: checked.checkId,
    kind: checked.counted === null ? 'visits' : 'hourly counts',
    needsMean: presentNeedsMean(checked, areas),
    keptUntil: checked.checkedAt + visitLogLimits.checkKeptFor,
    fileName: checked.fileName,
    sha256: checked.sha256,
    bytes: checked.bytes,
    rows: report.rows,
    goodRows: report.goodRows,
    problemRows: report.problemRows,
    problems: report.problems,
    identicalRows: report.identicalRows,
    period,
    study: study ? presentStudy(study, areas) : null,
    accepting:
      period && study
        ? {
            newRows: study.newRows,
            ...acceptingChange(period, logs, checked.counted === null ? 'visits' : 'hourly counts'),
          }
        : null,
    lastTimeAt: report.lastTimeAt,
    visitsByArea: presentAreas(report.visitsByArea, areas),
    recorded: report.recorded,
  };
}

/** Areas of hourly counts: their mean stays have to be stated. */
export function presentNeedsMean({ counted }: CheckedFile, areas: readonly CareArea[]): string[] {
  const codes = (counted?.areas ?? []).filter(({ arrivals }) => arrivals > 0).map(({ area }) => area);
  return areas.filter(({ code }) => codes.includes(code)).map(({ id }) => id);
}

function presentStudy({ gaps, levelShifts, heaps }: FileStudy, areas: readonly CareArea[]) {
  const idOf = (code: number | null) => areas.find((area) => area.code === code)?.id ?? null;
  return {
    gaps: gaps.map(({ area, from, to, expected }) => ({ areaId: idOf(area), from, to, expected })),
    levelShifts: levelShifts.map(({ area, at, before, after }) => ({ areaId: idOf(area), at, before, after })),
    heaps,
  };
}

function presentAreas(counts: readonly { area: number; visits: number }[], areas: readonly CareArea[]) {
  return areas
    .map((area) => ({
      areaId: area.id,
      name: area.name,
      visits: counts.find((count) => count.area === area.code)?.visits ?? 0,
    }))
    .filter((area) => area.visits > 0);
}
