// @vitest-environment node
import { gzipSync } from 'node:zlib';
import { describe, expect, test } from 'vitest';
import { gunzipSync } from 'node:zlib';
import { checkFile } from '../../../../src/features/visit-logs/check-file.ts';
import { offerMapping } from '../../../../src/features/visit-logs/mapping.ts';
import { EncounterReader } from '../../../../src/features/visit-logs/read-encounters.ts';
import { surveyFile } from '../../../../src/features/visit-logs/survey-file.ts';

/** 2026-12-01T00:00:00Z */
const now = 1_796_083_200;
const areas = [
  { id: 'area-acute', name: 'Acute' },
  { id: 'area-minors', name: 'Minors' },
];

const place = (name: string, start?: string, end?: string, more: object = {}) => ({
  location: { reference: `Location/${name}`, display: name },
  status: 'completed',
  ...(start ? { period: { start, end } } : {}),
  ...more,
});

/** An Encounter as FHIR R4 (hl7.org/fhir/R4/encounter.html) has it, with elements that must not leave this computer. */
function encounter(more: object = {}) {
  return {
    resourceType: 'Encounter',
    id: 'f20393339e911',
    identifier: [{ system: 'urn:oid:1.2.3', value: 'MRN 482913' }],
    text: { status: 'generated', div: '<div>Olivia Fairweather, fell off a ladder</div>' },
    status: 'finished',
    class: { system: 'http://terminology.hl7.org/CodeSystem/v3-ActCode', code: 'EMER' },
    subject: { reference: 'Patient/4711', display: 'Fairweather, Olivia' },
    participant: [{ individual: { display: 'Dr Okell' } }],
    reasonCode: [{ text: 'cut to the left hand' }],
    period: { start: '2026-10-25T22:10:00+00:00', end: '2026-10-26T01:15:00Z' },
    location: [place('Acute', '2026-10-25T22:15:00Z', '2026-10-26T01:15:00Z')],
    hospitalization: {
      dischargeDisposition: {
        coding: [{ system: 'http://terminology.hl7.org/CodeSystem/discharge-disposition', code: 'home' }],
        text: 'with her sister, 07700 900123',
      },
    },
    ...more,
  };
}

const ndjson = (...resources: object[]) => `${resources.map((each) => JSON.stringify(each)).join('\n')}\n`;
const survey = (content: string | Uint8Array<ArrayBuffer>) =>
  surveyFile(new Blob([content]), new Set(['Acute', 'Minors']), now, () => undefined);

async function sentOf(content: string | Uint8Array<ArrayBuffer>) {
  const found = await survey(content);
  const settings = {
    survey: found,
    mapping: offerMapping(found, areas),
    areaIds: areas.map(({ id }) => id),
    timeZone: 'Europe/London',
    shiftEnds: [],
    covered: [],
    now,
  };
  const { outcome, payload } = await checkFile(new Blob([content]), settings, () => undefined);
  const sent = payload === null ? null : gunzipSync(Buffer.from(await payload.arrayBuffer())).toString();
  return { found, outcome, lines: sent?.trim().split('\n').slice(1) ?? null, sent };
}

/** The record under the header that one encounter becomes. */
const recordOf = (more: object) => {
  const reader = new EncounterReader();
  return (reader.push(ndjson(encounter(more))) + reader.end()).trimEnd().split('\n')[1];
};

describe('Encounters', () => {
  test('of class EMER go out as visits; nothing but period, location and disposition is kept', async () => {
    const { found, outcome, lines, sent } = await sentOf(
      ndjson(
        encounter(),
        encounter({
          location: [place('Minors')],
          hospitalization: undefined,
          period: { start: '2026-10-27T09:00:00.000Z' },
        }),
        encounter({ class: { code: 'AMB' } }),
        encounter({ class: { code: 'IMP' }, classHistory: [{ class: { code: 'EMER' }, period: {} }] }),
        encounter({ status: 'cancelled' }),
      ),
    );
    expect(found).toMatchObject({
      kind: 'encounters',
      rows: 2,
      facts: { encounters: { encounters: 5, otherClass: 2, onceEmergency: 1, notHappened: 1 } },
    });
    expect(lines).toEqual([
      '2026-10-25T22:10:00Z,,,2026-10-26T01:15:00Z,area-acute,home,',
      '2026-10-27T09:00:00Z,,,,area-minors,,',
    ]);
    expect(outcome).toMatchObject({ refused: null, report: { rows: 2, goodRows: 2, problems: [] } });
    const everything = JSON.stringify(found) + (sent ?? '');
    for (const secret of ['Fairweather', '4711', 'MRN', 'f20393339e911', 'Okell', 'ladder', 'left hand', '07700'])
      expect(everything).not.toContain(secret);
  });

  test('gzipped, with a byte order mark, or cut anywhere, it is the same', async () => {
    const text = ndjson(encounter(), encounter({ location: [place('Minors')] }));
    const { lines } = await sentOf(text);
    expect((await sentOf(new Uint8Array(gzipSync(text)))).lines).toEqual(lines);
    expect((await sentOf(`\uFEFF${text}`)).lines).toEqual(lines);
    expect((await sentOf(text.replaceAll('\n', '\r\n'))).lines).toEqual(lines);
    const whole = new EncounterReader();
    const expected = whole.push(text) + whole.end();
    for (let cut = 0; cut <= text.length; cut += 37) {
      const reader = new EncounterReader();
      expect(reader.push(text.slice(0, cut)) + reader.push(text.slice(cut)) + reader.end()).toBe(expected);
    }
  });

  test('first, longest and last location, by their periods and not by their order in the list', () => {
    const record = recordOf({
      location: [
        place('Short stay', '2026-10-26T00:30:00Z', undefined),
        place('Triage', '2026-10-25T22:10:00Z', '2026-10-25T22:30:00Z'),
        place('Acute', '2026-10-25T22:30:00Z', '2026-10-26T00:30:00Z', {
          physicalType: {
            coding: [{ system: 'http://terminology.hl7.org/CodeSystem/location-physical-type', code: 'bd' }],
          },
        }),
        place('Theatre', '2026-10-26T01:00:00Z', '2026-10-26T01:10:00Z', { status: 'planned' }),
      ],
    });
    expect(record).toBe(
      '2026-10-25T22:10:00+00:00,2026-10-25T22:30:00Z,2026-10-26T01:15:00Z,Triage,Acute,Short stay,Home',
    );
  });

  test('a location without a display goes by its reference; a disposition of another system by its display, code or text', () => {
    expect(
      recordOf({
        location: [{ location: { reference: 'Location/12' } }],
        hospitalization: { dischargeDisposition: { coding: [{ system: 'urn:x', code: '07' }] } },
      }),
    ).toBe('2026-10-25T22:10:00+00:00,,2026-10-26T01:15:00Z,Location/12,Location/12,Location/12,07');
    expect(
      recordOf({ location: undefined, hospitalization: { dischargeDisposition: { text: 'Ward 7, "short"' } } }),
    ).toBe('2026-10-25T22:10:00+00:00,,2026-10-26T01:15:00Z,,,,"Ward 7, ""short"""');
  });

  // hl7.org/fhir/R4/valueset-encounter-discharge-disposition.html
  test.each([
    ['home', 0],
    ['alt-home', 0],
    ['other-hcf', 2],
    ['psy', 2],
    ['aadvice', 3],
    ['exp', 255],
  ])('the standard’s disposition %s is offered as code %d', async (code, ours) => {
    const hospitalization = {
      dischargeDisposition: {
        coding: [{ system: 'http://terminology.hl7.org/CodeSystem/discharge-disposition', code }],
      },
    };
    const found = await survey(ndjson(encounter({ hospitalization })));
    expect(Object.values(offerMapping(found, areas).dispositions)).toEqual([ours]);
  });

  test('an identifier in a location bars the column', async () => {
    const found = await survey(ndjson(encounter({ location: [place('Fairweather, Olivia')] })));
    expect(found.columns[3]).toMatchObject({
      isBarred: true,
      identifier: { kind: 'name', from: 'values' },
      values: null,
    });
  });
});

describe('files of JSON that cannot be read', () => {
  const json = 'is not one whole JSON object. Save the Encounters as NDJSON: each on a line of its own.';
  test.each([
    ['pretty-printed', JSON.stringify(encounter(), null, 2), `Line 1 ${json}`],
    [
      'a list',
      JSON.stringify([encounter()]),
      'Line 1 is not an Encounter resource of HL7 FHIR R4. Export only Encounters.',
    ],
    ['cut short', ndjson(encounter()) + JSON.stringify(encounter()).slice(0, 80), `Line 2 ${json}`],
    [
      'a Bundle',
      ndjson({ resourceType: 'Bundle', entry: [] }),
      'Line 1 is a Bundle. Save its Encounters as NDJSON: each on a line of its own, without the Bundle.',
    ],
    [
      'a Patient among Encounters',
      ndjson(encounter(), { resourceType: 'Patient', name: [{ family: 'Fairweather' }] }),
      'Line 2 is not an Encounter resource of HL7 FHIR R4. Export only Encounters.',
    ],
    [
      'FHIR R5',
      ndjson(encounter({ class: [{ coding: [{ code: 'EMER' }] }] })),
      'Line 1 gives its class as a list, as FHIR R5 has it. Export Encounters of FHIR R4.',
    ],
    [
      'no emergency',
      ndjson(encounter({ class: { code: 'AMB' } }), encounter({ class: { code: 'IMP' } })),
      'None of its 2 Encounters is an emergency visit: class EMER is expected, and a status other than planned, cancelled or entered-in-error.',
    ],
    [
      'a very long line',
      `{"resourceType":"Encounter","x":"${'x'.repeat(1_100_000)}`,
      'Line 1 is longer than 1,000,000 characters; one Encounter a line is expected.',
    ],
    [
      'in another encoding',
      new Uint8Array(Buffer.from(ndjson(encounter({ location: [place('Café')] })), 'latin1')),
      'The file is not encoded in UTF-8, which JSON is. Export the Encounters again.',
    ],
  ])('%s', async (_, content, message) => {
    await expect(survey(content)).rejects.toThrow(expect.objectContaining({ name: 'UnreadableFileError', message }));
  });
});
