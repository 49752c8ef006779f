import { describe, expect, it } from 'vitest';
import { makeRecordParser } from '../../../server/features/visit-logs/parse-records.ts';
import { guessAmbulance, guessArea, guessDisposition } from '../../../shared/domain/guess-value.ts';
import { DateOrderTally, readLocalTime } from '../../../shared/domain/local-time.ts';
import { screenHeader } from '../../../shared/domain/screen-header.ts';
import { VisitFileReader } from '../../../shared/domain/visit-file.ts';
import { notRecorded, visitColumns, type VisitColumn, type VisitRow } from '../../../shared/domain/visit-row.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { readReference, readVisitText, unpackReference } from '../../support/read-reference-log.ts';

// raw-export.csv.gz holds the visits of visits.csv.gz as a patient system might write them: other column names, local times
// with the day first and no offset, columns that mean nothing to planning. make-visits.py wrote both with Python's zoneinfo.

const truth = readReference('truth.json') as { timeZone: string; takenAt: number; areas: string[] };
const { rowsInRepeatedHour } = readReference('expected.json') as { rowsInRepeatedHour: number[] };
const text = unpackReference('raw-export.csv.gz');
const zone = makeZone(truth.timeZone);
const areas = truth.areas.map((name) => ({ id: name, name }));

const sources: Record<VisitColumn, string> = {
  arrival_at: 'Booked in',
  bed_space_at: 'First cubicle',
  admission_decision_at: 'Bed requested',
  departure_at: 'Left department',
  care_area: 'Zone',
  disposition: 'Leaving route',
  arrived_by_ambulance: 'Brought by ambulance',
};

function read() {
  const visits = new Map<number, VisitRow>();
  const reader = new VisitFileReader({
    parse: makeRecordParser(),
    places: (header) => ({
      places: Object.fromEntries(visitColumns.map((column) => [column, header.indexOf(sources[column])])) as Record<
        VisitColumn,
        number
      >,
    }),
    reading: {
      time(value) {
        const found = zone.fromLocal(readLocalTime(value, 'day first'));
        return found.length === 1 ? found[0] : found.length === 0 ? 'skipped' : 'repeated';
      },
      area: (value) => truth.areas.indexOf(guessArea(value, areas) ?? ''),
      disposition: (value) => guessDisposition(value) ?? -1,
      ambulance: (value) => guessAmbulance(value) ?? -1,
    },
    now: truth.takenAt,
    onVisit: (visit, row) => visits.set(row, visit),
  });
  reader.push(text);
  return { outcome: reader.end(), visits };
}

describe('a raw export of the reference log', () => {
  it('has no column whose name could identify a patient', () => {
    const header = text.slice(0, text.indexOf('\r\n')).split(',');
    expect(header).toEqual(expect.arrayContaining(Object.values(sources)));
    expect(header.map((name) => screenHeader(name, truth.takenAt))).toEqual(header.map(() => null));
  });

  it('shows by its dates that the day comes first', () => {
    const tally = new DateOrderTally();
    const lines = text.trimEnd().split('\r\n').slice(1);
    const place = text.slice(0, text.indexOf('\r\n')).split(',').indexOf(sources.arrival_at);
    for (const line of lines) tally.add(line.split(',')[place]);
    expect(tally.verdict()).toBe('day first');
    expect(tally.contrary).toBe(0);
  });

  it('holds the same visits, but for those whose time came twice when the clocks went back', () => {
    const { outcome, visits } = read();
    if (outcome.refused !== null) throw new Error(outcome.refused[0].message);
    expect(outcome.report.problemRows).toBe(rowsInRepeatedHour.length);
    expect(new Set(outcome.report.problems.map(({ problem }) => problem))).toEqual(new Set(['time repeated']));
    const { table } = readVisitText(unpackReference('visits.csv.gz'), truth.areas, truth.takenAt);
    const repeated = new Set(rowsInRepeatedHour);
    expect(outcome.report.rows).toBe(table.length);
    for (let row = 1; row <= table.length; row += 1) {
      const i = row - 1;
      const same = {
        area: table.area[i],
        arrivalAt: table.arrivalAt[i],
        bedSpaceAt: table.bedSpaceAt[i],
        admissionDecisionAt: table.admissionDecisionAt[i],
        departureAt: table.departureAt[i],
        disposition: table.disposition[i],
        byAmbulance: table.byAmbulance[i],
      };
      expect(visits.get(row), `row ${row}`).toEqual(repeated.has(row) ? undefined : same);
    }
    expect([...visits.values()].filter(({ disposition }) => disposition === notRecorded)).toHaveLength(
      table.disposition.filter((code) => code === notRecorded).length,
    );
  });
});
