import { localDate, makeZone } from '../../../shared/domain/zoned-time.ts';
import { withCountedArrivals } from '../../../shared/forecasting/counted-hours.ts';
import { countHourly } from '../../../shared/forecasting/count-hourly.ts';
import { fitArrivals } from '../../../shared/forecasting/fit-arrivals.ts';
import { arrivalDiagnostics } from '../../../shared/forecasting/arrival-diagnostics.ts';
import { fitHourlyStays, type StaySource } from '../../../shared/forecasting/fit-hourly-stays.ts';
import { fitStays } from '../../../shared/forecasting/fit-stays.ts';
import type { StayModel } from '../../../shared/forecasting/stay-model.ts';
import { weeklyRates } from '../../../shared/forecasting/weekly-rates.ts';
import type { CalendarDay, ExposureGap } from '../../../shared/forecasting/visit-table.ts';
import { coveredSpans, gapsBetween } from '../../database/covered-spans.ts';
import { readSiteVisits, type SiteVisits } from '../../database/read-visits.ts';
import type { FitReply, FitRequest } from './fit-input.ts';
import { blockNames, stayFindings, streamsOf } from './fitted-detail.ts';

/** Fits a site's model on a thread of its own. A RangeError of the engine (too little history…) is an answer, not a fault. */
export default function fit(request: FitRequest): FitReply {
  const tell = (share: number, text: string) => {
    request.progress.postMessage({ share, text });
  };
  try {
    return fitSite(request, tell);
  } catch (error) {
    if (error instanceof RangeError) return { refused: `The model could not be fitted: ${error.message}.` };
    throw error;
  } finally {
    request.progress.close();
  }
}

function fitSite(request: FitRequest, tell: (share: number, text: string) => void): FitReply {
  const { databaseFile, siteId, timeZone, calendar, now } = request;
  tell(0.02, 'Reading visits');
  const { table, areaIds, lineage, facts, hourly } = readSiteVisits(databaseFile, siteId, -Infinity, request.logIds);
  const zone = makeZone(timeZone);
  const arrivals = withCountedArrivals(table, hourly.counted, zone);
  if (arrivals.length === 0) return { refused: 'No accepted visit log holds a visit that counts.' };
  const capSeconds = request.stayCapHours * 3600;
  // A log speaks until it was taken; one selected by departures has not seen the last long stayers yet.
  const logs = [...lineage, ...hourly.lineage];
  const covered = coveredSpans(logs, now, capSeconds);
  if (covered.length === 0) return { refused: 'The accepted logs cover no time that can be used yet.' };
  const from = covered[0].from;
  const to = covered[covered.length - 1].to;
  const gaps: ExposureGap[] = [
    ...gapsBetween(covered).map((gap) => ({ area: null, ...gap })),
    ...request.gaps
      .filter((gap) => gap.to > from && gap.from < to)
      .flatMap((gap) => {
        const area = gap.areaId === null ? null : areaIds.indexOf(gap.areaId);
        return area === -1 ? [] : [{ area, from: Math.max(gap.from, from), to: Math.min(gap.to, to) }];
      }),
  ];
  tell(0.1, 'Counting arrivals by hour');
  const counts = countHourly(arrivals, areaIds.length, zone, from, to, gaps);
  const known = daysUntil(calendar, localDate(zone.toLocal(to)));
  const arrival = fitArrivals({
    counts,
    calendar: known,
    onProgress: (share) => {
      tell(0.12 + 0.5 * share, 'Fitting arrivals');
    },
  });
  const { stay, source } = fitStaysOf(request, { table, areaIds, lineage, facts, hourly }, gaps, (share) => {
    tell(0.62 + 0.33 * share, 'Fitting length of stay');
  });
  tell(0.97, 'Writing down what was found');
  const areaName = (index: number) => request.areaNames[areaIds[index]] ?? areaIds[index];
  return {
    refused: null,
    parameters: { areaIds, arrival, stay, calendar },
    lineage: logs,
    staysFrom: source,
    trainedFrom: from,
    trainedTo: to,
    visits: arrivals.length,
    detail: {
      settings: {
        'weekly profile, half-life in weeks': finite(arrival.settings.profileHalfLifeWeeks),
        'variation beyond Poisson': arrival.structure,
        'level, standard deviation a day': Math.sqrt(arrival.levelVariancePerDay),
        'stays cut at, hours': stay.capHours,
        'departure blocks, hours': stay.blockHours,
        'weeks of history': arrival.weeksOfHistory,
      },
      areas: areaIds.map((areaId, index) => {
        const { ratePerHour, low, high } = weeklyRates(arrival, index);
        return { areaId, name: areaName(index), ratePerHour, rateLow: low, rateHigh: high };
      }),
      streams: streamsOf(stay, areaIds),
      departureBlocks: blockNames(stay),
      variation: {
        sharedDayCv: Math.sqrt(Math.expm1(arrival.factorVariance)),
        dayCorrelation: arrival.factorCorrelation,
        outflowCv: Math.sqrt(stay.outflow.admitted.variance),
        outflowCorrelation: stay.outflow.admitted.correlation,
        structure: arrival.structure,
      },
      findings: [
        ...[...arrival.cautions, ...stay.cautions].map((text) => ({
          name: 'Caution',
          size: '',
          meaning: nameAreas(text, areaName),
          concern: true,
        })),
        ...arrivalDiagnostics(arrival, counts, table.length > 0 ? table.arrivalAt : undefined).findings,
        ...(source === null ? stayFindings(stay, table.length) : []),
      ],
    },
  };
}

/** Stays from visits where there are any that can be used, else from hourly counts; the source is null for visits. */
function fitStaysOf(
  request: FitRequest,
  visits: SiteVisits,
  gaps: readonly ExposureGap[],
  onProgress: (share: number) => void,
): { stay: StayModel; source: StaySource | null } {
  const { table, areaIds, lineage, facts, hourly } = visits;
  const zone = makeZone(request.timeZone);
  const shared = { areas: areaIds.length, zone, capHours: request.stayCapHours, calendar: request.calendar };
  const told = coveredSpans(lineage, request.now, request.stayCapHours * 3600);
  if (facts && table.length > 0 && told.length > 0) {
    const window = { from: told[0].from, to: told[told.length - 1].to };
    const unspoken = gapsBetween(told).map((gap) => ({ area: null, ...gap }));
    try {
      const stay = fitStays({
        ...shared,
        visits: table,
        window,
        facts: { ...facts, takenAt: Math.min(facts.takenAt, window.to) },
        gaps: [...gaps, ...unspoken],
        onProgress,
      });
      return { stay, source: null };
    } catch (error) {
      // Too few visits to learn stays from: counts may do.
      if (!(error instanceof RangeError) || hourly.counted.length === 0) throw error;
    }
  }
  const counted = coveredSpans(hourly.lineage, request.now, 0);
  const window = { from: counted[0].from, to: counted[counted.length - 1].to };
  const { stay, source } = fitHourlyStays({
    ...shared,
    counted: hourly.counted,
    window,
    gaps,
    stated: hourly.stated,
  });
  onProgress(1);
  return { stay, source };
}

/** The engine numbers areas from 1; a page calls them by name. */
function nameAreas(text: string, areaName: (index: number) => string): string {
  return text.replace(/\barea (\d+)\b/gi, (_, number: string) => areaName(Number(number) - 1));
}

function daysUntil(calendar: readonly CalendarDay[], date: string): CalendarDay[] {
  return calendar.filter((day) => day.date <= date);
}

function finite(value: number | null): number | null {
  return value !== null && Number.isFinite(value) ? value : null;
}
