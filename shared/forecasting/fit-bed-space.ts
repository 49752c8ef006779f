import type { BedSpaceStays } from './stay-model.ts';
import type { VisitTable } from './visit-table.ts';

const leftBeforeTreatment = 3;

/**
 * Waiting and stay in a bed space, apart, where bed-space times are loaded. Stays are censored at the cap. Patience
 * is a competing risk: those who left before treatment without a bed space, over the hours that everyone waited.
 * @param used whether a row's arrival is in the span that the fit uses. Cost: linear in visits.
 */
export function fitBedSpace(
  visits: VisitTable,
  areas: number,
  capHours: number,
  used: (row: number) => boolean,
): (BedSpaceStays | null)[] {
  const found: BedSpaceStays[] = Array.from({ length: areas }, (_, area) => ({
    area,
    visits: 0,
    meanWaitHours: 0,
    departures: [0, 0, 0, 0],
    hoursInBedSpace: [0, 0, 0, 0],
    leftBeforeTreatment: 0,
    hoursWaiting: 0,
  }));
  for (let row = 0; row < visits.length; row += 1) {
    const area = visits.area[row];
    if (area >= areas || !used(row)) continue;
    const result = found[area];
    const disposition = visits.disposition[row];
    const arrival = visits.arrivalAt[row];
    const bed = visits.bedSpaceAt[row];
    const departure = visits.departureAt[row];
    if (bed >= arrival && !(departure < bed)) {
      const wait = (bed - arrival) / 3600;
      result.visits += 1;
      result.meanWaitHours += wait;
      result.hoursWaiting += Math.min(wait, capHours);
      if (disposition < 4 && departure >= bed) {
        const stay = (departure - bed) / 3600;
        result.hoursInBedSpace[disposition] += Math.min(stay, capHours);
        if (stay <= capHours) result.departures[disposition] += 1;
      }
    } else if (Number.isNaN(bed) && disposition === leftBeforeTreatment && departure >= arrival) {
      result.leftBeforeTreatment += 1;
      result.hoursWaiting += Math.min((departure - arrival) / 3600, capHours);
    }
  }
  return found.map((result) =>
    result.visits > 0 ? { ...result, meanWaitHours: result.meanWaitHours / result.visits } : null,
  );
}
