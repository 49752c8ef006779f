import { dispositions } from '../../../shared/domain/disposition.ts';
import {
  blockHazards,
  expectedShares,
  streamsPerArea,
  type StayModel,
} from '../../../shared/forecasting/stay-model.ts';
import type { FittedDetail } from './fit-input.ts';

/** Length of stay by care area and disposition, and for boarding. */
export function streamsOf(stay: StayModel, areaIds: readonly string[]): FittedDetail['streams'] {
  return stay.streams
    .filter((stream) => stream.visits > 0)
    .map((stream) => {
      const shares = expectedShares(stay.shares[stream.area]);
      const isBoarding = stream.stream >= dispositions.length;
      const hazards = blockHazards(stream);
      const mean = stream.hazard.shape / stream.hazard.rate;
      const [low, high] = stream.limits ?? [mean, mean];
      return {
        areaId: areaIds[stream.area],
        disposition: isBoarding ? 'boarding' : dispositions[stream.stream],
        // Stays whose disposition nobody knows are shared out among the streams, so these need not be whole.
        visits: Math.round(stream.visits),
        share: isBoarding ? 0 : shares.reduce((sum, block) => sum + block[stream.stream], 0) / shares.length,
        meanHours: 1 / (stream.departuresPerHour ?? mean),
        meanLow: 1 / high,
        meanHigh: low > 0 ? 1 / low : 720,
        censored: Math.round(stream.censored),
        departureFactor: Array.from(hazards, (hazard) => hazard / mean),
      };
    });
}

/** Names of the departure blocks: weekdays first, then weekends and holidays. */
export function blockNames(stay: StayModel): string[] {
  const perDay = 24 / stay.blockHours;
  const clock = (hour: number) => `${String(hour % 24).padStart(2, '0')}:00`;
  return ['Weekday', 'Weekend or holiday'].flatMap((day) =>
    Array.from(
      { length: perDay },
      (_, block) => `${day} ${clock(block * stay.blockHours)}–${clock((block + 1) * stay.blockHours)}`,
    ),
  );
}

/** What the log's stays and times look like, as effect sizes in words. */
export function stayFindings(stay: StayModel, visits: number): FittedDetail['findings'] {
  const percent = (share: number) =>
    share > 0 && share < 0.0005 ? '<0.1 %' : `${(100 * share).toFixed(share > 0 && share < 0.1 ? 1 : 0)} %`;
  const outflowSd = {
    others: Math.sqrt(stay.outflow.others.variance),
    admitted: Math.sqrt(stay.outflow.admitted.variance),
  };
  const { heaping, leftOut } = stay;
  const findings: FittedDetail['findings'] = [
    {
      name: 'Times on the full hour',
      size: `${percent(heaping.departuresOnTheHour)} of departures, ${percent(heaping.arrivalsOnTheHour)} of arrivals`,
      meaning:
        heaping.departuresOnTheHour > 3 * heaping.expectedOnTheHour
          ? 'Many departures are written on the full hour: departures are entered late, and the hour they fall in is uncertain.'
          : `Evenly spread minutes would give ${percent(heaping.expectedOnTheHour)}: times are written as they happen.`,
      concern: heaping.departuresOnTheHour > 3 * heaping.expectedOnTheHour,
    },
    {
      name: 'Stays cut at the cap',
      size: `${percent(stay.overCapShare)} stay longer than ${String(stay.capHours)} h`,
      meaning:
        stay.overCapShare > 0.02
          ? 'Many very long stays: check for visits that were never closed.'
          : 'They count as still present at the cap.',
      concern: stay.overCapShare > 0.02,
    },
    {
      name: 'How departures vary by day',
      size: `± ${percent(outflowSd.others)}, for admitted patients ± ${percent(outflowSd.admitted)}`,
      meaning:
        Math.max(outflowSd.others, outflowSd.admitted) < 0.02
          ? 'Patients leave at much the same pace on all days.'
          : stay.outflow.admitted.correlation >= 0.1
            ? `A slow day tends to be followed by another: correlation from day to day ${stay.outflow.admitted.correlation.toFixed(2)} for admitted patients. This moves need more than arrivals do.`
            : 'Days differ in how fast patients leave, and one day says next to nothing about the next. This moves need more than arrivals do.',
      concern: false,
    },
  ];
  const stages = (stay.toDecision ?? []).flatMap((stage) => stage ?? []);
  if (stages.length > 0) {
    const decided = stages.reduce((sum, stage) => sum + stage.departures, 0);
    const hours = stages.reduce((sum, stage) => sum + stage.hoursAtRisk, 0) / decided;
    findings.push({
      name: 'Time to the admission decision',
      size: `${hours.toFixed(1)} h on average, in ${String(stages.length)} of ${String(stay.areas)} areas a stage of its own`,
      meaning:
        stay.decisionFollows === 'admitted'
          ? 'Admitted patients first wait for the decision, then board; slow days of the wards hold up both.'
          : 'Admitted patients first wait for the decision, then board; slow days of the wards hold up boarding alone.',
      concern: false,
    });
  }
  const unusable = leftOut.endsBeforeStart + leftOut.over30Days + leftOut.departureUnknown;
  if (unusable > 0) {
    findings.push({
      name: 'Stays that could not be used',
      size: `${String(unusable)} of ${String(visits)} visits`,
      meaning: `${String(leftOut.departureUnknown)} without a departure, ${String(leftOut.endsBeforeStart)} ending before they start, ${String(leftOut.over30Days)} over 30 days. Their arrivals count all the same.`,
      concern: unusable > visits * 0.02,
    });
  }
  const shaped = stay.streams.filter((stream) => stream.shape !== null && stream.stream < streamsPerArea);
  findings.push({
    name: 'Shape of stays',
    size: `${String(shaped.length)} of ${String(stay.streams.filter((stream) => stream.visits > 0).length)} streams have enough stays for a shape of their own`,
    meaning:
      'Where that shape moves tonight’s P90 by a bed or more it is used in place of the exponential; Tonight says which.',
    concern: false,
  });
  return findings;
}
