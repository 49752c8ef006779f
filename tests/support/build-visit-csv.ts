import { canonicalHeader } from '../../shared/domain/canonical-visit.ts';
import { formatInstant } from '../../shared/domain/instant.ts';

/** One row of a visit log as a test writes it; times are UTC seconds, '' where not recorded. */
export interface CsvVisit {
  arrival: number | string;
  bedSpace: number | string;
  decision: number | string;
  departure: number | string;
  area: string;
  disposition: string;
  ambulance: string;
}

const text = (value: number | string) => (typeof value === 'number' ? formatInstant(value) : value);

/** A line of the product's own visit log. */
export function visitLine(visit: Partial<CsvVisit> & { arrival: number | string }): string {
  const {
    arrival,
    bedSpace = '',
    decision = '',
    departure = '',
    area = 'Acute',
    disposition = 'home',
    ambulance = 'no',
  } = visit;
  return [text(arrival), text(bedSpace), text(decision), text(departure), area, disposition, ambulance].join(',');
}

/** A whole log: one visit every `everySeconds` from `from`, each staying three hours, areas in turn. */
export function buildVisitCsv({
  from,
  rows,
  everySeconds = 600,
  areas = ['Acute', 'Resuscitation'],
}: {
  from: number;
  rows: number;
  everySeconds?: number;
  areas?: string[];
}): string {
  const lines = [canonicalHeader];
  for (let row = 0; row < rows; row += 1) {
    const arrival = from + row * everySeconds;
    const admitted = row % 4 === 0;
    lines.push(
      visitLine({
        arrival,
        bedSpace: arrival + 1200,
        decision: admitted ? arrival + 5400 : '',
        departure: arrival + 10_800,
        area: areas[row % areas.length],
        disposition: admitted ? 'admitted' : 'home',
        ambulance: row % 3 === 0 ? 'yes' : 'no',
      }),
    );
  }
  return `${lines.join('\n')}\n`;
}
