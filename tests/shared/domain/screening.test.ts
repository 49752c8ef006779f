import { describe, expect, test } from 'vitest';
import { findIdentifier } from '../../../shared/domain/find-identifier.ts';
import { neutralFileName, screenFileName } from '../../../shared/domain/screen-file-name.ts';
import { screenHeader } from '../../../shared/domain/screen-header.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { ValueTally } from '../../../shared/domain/value-tally.ts';

const now = 1_790_000_000;
const kindOf = (value: string) => findIdentifier(value, now)?.kind ?? null;

describe('findIdentifier', () => {
  // Addresses of the documentation ranges of RFC 5737, 3849 and 2606; telephone numbers of Ofcom's and the NANP's
  // ranges for drama; the other numbers are specimens named in national-number.test.ts.
  test.each([
    ['Fairweather, Olivia', 'name'],
    ['OLIVIA Fairweather', 'name'],
    ['Dr Quillfeather', 'name'],
    ['Tamsin Quillfeather', 'name'],
    ['01/02/1950', 'date of birth'],
    ['3 Mar 1971', 'date of birth'],
    ['19500201', 'date of birth'],
    ['1950-02-01 00:00:00', 'date of birth'],
    ['DOB 1/2/50', 'date of birth'],
    ['48291375', 'record number'],
    ['AB-482913', 'record number'],
    ['123-45-6789', 'insurance number'],
    ['1EG4-TE5-MK73', 'insurance number'],
    ['943 476 5919', 'national patient number'],
    ['020 7946 0123', 'telephone number'],
    ['(555) 010-0123', 'telephone number'],
    ['555-010-0123', 'telephone number'],
    ['+1 555 010 0123', 'telephone number'],
    ['olivia.f@example.org', 'e-mail address'],
    ['Flat 2 14 Harbour Road', 'postal address'],
    ['Hauptstraße 5', 'postal address'],
    ['EC1A 1BB', 'postcode'],
    ['90210-1234', 'postcode'],
    ['K1A 0B1', 'postcode'],
    ['www.example.org/x', 'web address'],
    ['198.51.100.7', 'IP address'],
    ['2001:db8::8:800:200c:417a', 'IP address'],
    ['fell down. cannot walk', 'free text'],
    ['brought in by neighbour who found her in the garden', 'free text'],
  ])('%s looks like a %s', (value, kind) => {
    expect(kindOf(value)).toBe(kind);
  });

  test.each([
    'Acute',
    'Resus',
    'Majors 2',
    'Fast Track',
    'Blue Zone',
    'St Agnes Ward',
    'Bay 12',
    'A1',
    'ED-OBS',
    'Children’s area',
    'home',
    'admitted',
    'left before treatment',
    'Discharged home',
    'LWBS',
    'yes',
    'no',
    'Y',
    '0',
    '1',
    '2026-09-21',
    '2026-09-21 10:00',
    '21/09/2026 10:00',
    '09.21.2026 10:00',
    '202609211000',
    '20260921',
    '24:00',
    'n/a',
    '-',
    'not recorded',
    '10:00',
    '45923.4375',
    'Urgent Care Centre',
    'Rapid Assessment',
    '3 North',
  ])('%s identifies nobody', (value) => {
    expect(kindOf(value)).toBeNull();
  });
});

describe('ValueTally', () => {
  test('a bare code is a patient’s when it hardly ever occurs, and a place’s when it is common', () => {
    const rare = new ValueTally(now);
    rare.add('482913');
    expect(rare.identifiers()).toEqual([{ kind: 'record number', rows: 1 }]);
    const common = new ValueTally(now);
    for (let row = 0; row < 500; row += 1) common.add('482913');
    expect(common.identifiers()).toEqual([]);
  });

  test('a sure sign counts however often it occurs, and one row in a hundred thousand is found', () => {
    const tally = new ValueTally(now);
    for (let row = 0; row < 100_000; row += 1)
      tally.add(row === 77_777 ? 'olivia@example.org' : `Zone ${String(row % 3000)}`);
    expect(tally.identifiers()).toEqual([{ kind: 'e-mail address', rows: 1 }]);
    expect(tally.tooMany).toBe(true);
  });
});

describe('screenHeader', () => {
  test.each([
    ['Patient Name', 'name'],
    ['lastName', 'name'],
    ['Consultant', 'name'],
    ['D.O.B.', 'date of birth'],
    ['BirthDate', 'date of birth'],
    ['Hospital Number', 'record number'],
    ['encounterID', 'record number'],
    ['CSN', 'record number'],
    ['NHSNumber', 'national patient number'],
    ['Medicare no.', 'insurance number'],
    ['Tel', 'telephone number'],
    ['Email', 'e-mail address'],
    ['Home Address', 'postal address'],
    ['ZIP', 'postcode'],
    ['web link', 'web address'],
    ['IPAddress', 'IP address'],
    ['Triage Notes', 'free text'],
    ['Diagnosis', 'free text'],
    ['olivia@example.org', 'e-mail address'],
  ])('%s holds a %s', (header, kind) => {
    expect(screenHeader(header, now)).toBe(kind);
  });

  test.each([
    'arrival_at',
    'ArrivalDateTime',
    'Departure',
    'Admit decision',
    'DTA',
    'Bed Allocated',
    'Care Area',
    'Ward name',
    'Area Name',
    'locationId',
    'Disposition',
    'Discharge Destination',
    'Arrival Mode',
    'Ambulance',
    'triage category',
    'arrived_by_ambulance',
    'First seen',
    'Left department',
  ])('%s identifies nobody', (header) => {
    expect(screenHeader(header, now)).toBeNull();
  });
});

describe('screenNote', () => {
  test.each([
    ['Mrs Fairweather moved to bay 4', 'name'],
    ['Olivia Fairweather waits for a ward', 'name'],
    ['call 07700 900123', 'telephone number'],
    ['write to olivia@example.org', 'e-mail address'],
    ['MRN 48291 boarding since 14:00', 'record number'],
    ['patient 943 476 5919 boards', 'national patient number'],
    ['lives at 12 Mill Lane', 'postal address'],
    ['born 1950', 'date of birth'],
    ['see https://example.org/p/1', 'web address'],
  ])('%s: %s', (note, kind) => {
    expect(screenNote(note)).toBe(kind);
  });

  test.each([
    'Two bays opened at 21:00, four boarders out by 20:30',
    'Site manager called, ward 7 takes 3 patients after 22:15',
    'Policy step 2. Ambulance liaison told on 2026-09-21.',
    'Staffing gap of 1.5 nurses until 07:30; agency asked',
    'Beds 12-14 closed for cleaning, back in 2 h',
    'Approved: weekly pattern agrees with 2024 and 2025',
    '2 patients on the way to the ward, 10 more within 3 hours',
  ])('%s', (note) => {
    expect(screenNote(note)).toBeNull();
  });
});

describe('screenFileName', () => {
  test.each([
    ['ED visits 2026-09.csv', 'ED visits 2026-09.csv'],
    ['C:\\exports\\visits_20260901_20260930.csv', 'visits_20260901_20260930.csv'],
    ['Olivia Fairweather.csv', neutralFileName],
    ['olivia@example.org.csv', neutralFileName],
    ['dob_1950-02-01.csv', neutralFileName],
    ['march-07700900123.csv', neutralFileName],
    ['visits-2026-09-01.xlsx', 'visits-2026-09-01.xlsx'],
    ['', neutralFileName],
  ])('%s', (name, kept) => {
    expect(screenFileName(name, now)).toBe(kept);
  });
});
