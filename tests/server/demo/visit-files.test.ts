import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { demoSeed, demoSites } from '../../../demo/farrowmere.ts';
import { makeRawExport, rawFaults, rawHeader } from '../../../demo/make-raw-export.ts';
import { makeVisitLog } from '../../../demo/make-visit-log.ts';
import type { DemoVisit } from '../../../demo/make-visit-log.ts';
import { visitCsvHeader, writeVisitCsv } from '../../../demo/write-visit-csv.ts';
import { dispositions } from '../../../shared/domain/disposition.ts';
import { localSecondsOf, makeZone } from '../../../shared/domain/zoned-time.ts';

const [general] = demoSites;
const to = Date.parse('2026-05-20T18:30:00Z') / 1000;
const visits = makeVisitLog({ site: general, from: to - 3 * 86_400, to, seed: demoSeed });
const zone = makeZone(general.timeZone);

function parse(csv: string, delimiter = ','): Record<string, string>[] {
  const result = Papa.parse<Record<string, string>>(csv, { header: true, skipEmptyLines: true, delimiter });
  expect(result.errors).toEqual([]);
  return result.data;
}

describe('writeVisitCsv', () => {
  it('says every visit so that it can be read back', () => {
    const csv = writeVisitCsv(visits, general.areas);
    expect(csv.split('\r\n')[0]).toBe(
      'arrival_at,bed_space_at,admission_decision_at,departure_at,care_area,disposition,arrived_by_ambulance',
    );
    const seconds = (text: string) => (text === '' ? null : Date.parse(text) / 1000);
    const back = parse(csv).map((row): DemoVisit => ({
      areaId: general.areas.find(({ name }) => name === row.care_area)?.id ?? '',
      arrivalAt: Date.parse(row.arrival_at) / 1000,
      bedSpaceAt: seconds(row.bed_space_at),
      admissionDecisionAt: seconds(row.admission_decision_at),
      departureAt: seconds(row.departure_at),
      disposition: dispositions.find((word) => word === row.disposition) ?? null,
      byAmbulance: row.arrived_by_ambulance === 'yes',
    }));
    expect(back).toEqual(visits);
    expect(visits.some(({ departureAt }) => departureAt === null)).toBe(true);
  });

  it('writes instants in ISO 8601 with Z and the header even without a visit', () => {
    expect(parse(writeVisitCsv(visits, general.areas))[0].arrival_at).toMatch(/^\d{4}-\d\d-\d\dT\d\d:\d\d:00Z$/);
    expect(writeVisitCsv([], general.areas).trim()).toBe(visitCsvHeader.join(','));
  });

  it('refuses a visit of an area that is not among those given', () => {
    expect(() => writeVisitCsv(visits, general.areas.slice(1))).toThrow(RangeError);
  });
});

describe('makeRawExport', () => {
  const options = { timeZone: general.timeZone, areas: general.areas, seed: 5 };

  it('writes the same visits in local time, the day first, without an offset', () => {
    const rows = parse(makeRawExport(visits, options).csv);
    expect(rows).toHaveLength(visits.length);
    const back = rows.map((row) => {
      const [, day, month, year, hour, minute] =
        /^(\d\d)\/(\d\d)\/(\d{4}) (\d\d):(\d\d)$/.exec(row[rawHeader.arrivalAt]) ?? [];
      return zone.fromLocal(localSecondsOf(`${year}-${month}-${day}`, Number(hour) * 60 + Number(minute)))[0];
    });
    expect(back).toEqual(visits.map(({ arrivalAt }) => arrivalAt));
    expect(new Set(rows.map((row) => row[rawHeader.area]).filter((name) => /^acute$/i.test(name)))).toEqual(
      new Set(['Acute', 'ACUTE', 'acute']),
    );
  });

  it('holds nothing that identifies anybody unless asked to', () => {
    const plain = parse(makeRawExport(visits, options).csv);
    expect(Object.keys(plain[0])).not.toContain('Patient Name');
    const named = parse(makeRawExport(visits, { ...options, identifying: ['Patient Name', 'Date of Birth'] }).csv);
    expect(Object.keys(named[0])).toEqual(expect.arrayContaining(['Patient Name', 'Date of Birth']));
  });

  it('plants the faults asked for where it says', () => {
    const faults = Object.fromEntries(rawFaults.map((fault) => [fault, 2]));
    const { csv, planted } = makeRawExport(visits, { ...options, faults });
    const rows = parse(csv);
    expect(rows).toHaveLength(visits.length + 2);
    expect(planted).toHaveLength(2 * rawFaults.length);
    const rowOf = (line: number) => rows[line - 2];
    for (const { line, fault } of planted) {
      const row = rowOf(line);
      if (fault === 'no arrival time') expect(row[rawHeader.arrivalAt]).toBe('');
      if (fault === 'unknown area') expect(row[rawHeader.area]).toBe('Corridor far');
      if (fault === 'row twice') expect(rowOf(line + 1)).toEqual(row);
      // The spring change of 2026 in this zone: Sunday 29 March, 01:00 to 02:00 skipped.
      if (fault === 'hour that does not exist') expect(row[rawHeader.arrivalAt]).toBe('29/03/2026 01:30');
      if (fault === 'month before day') expect(row[rawHeader.arrivalAt]).toMatch(/^05\/25\/2026 /);
    }
  });

  it('can use another delimiter and begin with a byte order mark', () => {
    const { csv } = makeRawExport(visits, { ...options, delimiter: ';', byteOrderMark: true });
    expect(csv.startsWith('\uFEFF')).toBe(true);
    expect(Object.keys(parse(csv.slice(1), ';')[0])).toContain(rawHeader.arrivalAt);
  });

  it('refuses more faults than rows', () => {
    expect(() => makeRawExport(visits.slice(0, 2), { ...options, faults: { 'not a date': 3 } })).toThrow(RangeError);
  });
});
