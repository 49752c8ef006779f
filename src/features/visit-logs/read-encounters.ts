import { csvRecord } from './csv-record.ts';
import { UnreadableFileError } from './unreadable-file.ts';

/** How many encounters a file holds, and why some are not emergency visits. */
export interface EncounterFacts {
  encounters: number;
  /** Of another class than EMER. */
  otherClass: number;
  /** Of those, encounters that were EMER earlier (classHistory): patients who were admitted under the same encounter. */
  onceEmergency: number;
  /** Planned, cancelled or entered in error. */
  notHappened: number;
}

/** What is taken of an encounter, under headers that say what stands in the standard. */
const headers = [
  'Arrival (period.start)',
  'Bed space (start of the first location that is a bed)',
  'Departure (period.end)',
  'Care area: first location',
  'Care area: location of the longest stay',
  'Care area: last location',
  'Disposition (hospitalization.dischargeDisposition)',
] as const;

/** FHIR R4 value set encounter-discharge-disposition (terminology.hl7.org/CodeSystem/discharge-disposition). */
const dispositionDisplays: Record<string, string> = {
  home: 'Home',
  'alt-home': 'Alternative home',
  'other-hcf': 'Other healthcare facility',
  hosp: 'Hospice',
  long: 'Long-term care',
  aadvice: 'Left against advice',
  exp: 'Expired',
  psy: 'Psychiatric hospital',
  rehab: 'Rehabilitation',
  snf: 'Skilled nursing facility',
  oth: 'Other',
};
const dispositionSystem = 'http://terminology.hl7.org/CodeSystem/discharge-disposition';
const notHappenedStatus = new Set(['planned', 'cancelled', 'entered-in-error']);
const longestLine = 1_000_000;

type Json = Record<string, unknown>;

/**
 * Turns HL7 FHIR R4 Encounter resources, one a line (NDJSON), into CSV text with a header of its own.
 * Only period, location and hospitalization.dischargeDisposition of encounters of class EMER are taken;
 * every other element ends here.
 */
export class EncounterReader {
  readonly facts: EncounterFacts = { encounters: 0, otherClass: 0, onceEmergency: 0, notHappened: 0 };
  private rest = '';
  private line = 0;

  /** @returns CSV text of the lines that are whole; @throws UnreadableFileError naming the line */
  push(text: string): string {
    const lines = (this.rest + text).split('\n');
    this.rest = lines.pop() ?? '';
    const made = this.take(lines);
    if (this.rest.length > longestLine) {
      this.line += 1;
      throw this.fault('is longer than 1,000,000 characters; one Encounter a line is expected');
    }
    return made;
  }

  /** Reads what is left. @throws UnreadableFileError if there was no emergency encounter at all */
  end(): string {
    const text = this.take([this.rest]);
    const { encounters, otherClass, notHappened } = this.facts;
    if (encounters > 0 && encounters === otherClass + notHappened)
      throw new UnreadableFileError(
        `None of its ${encounters.toLocaleString('en')} ${encounters === 1 ? 'Encounter is an emergency visit' : 'Encounters is an emergency visit'}: class EMER is expected, and a status other than planned, cancelled or entered-in-error.`,
      );
    return text;
  }

  private take(lines: readonly string[]): string {
    let text = '';
    for (const line of lines) {
      if (this.line === 0) text += csvRecord(headers);
      this.line += 1;
      if (line.trim() === '') continue;
      const row = this.row(this.parse(line));
      if (row !== null) text += csvRecord(row);
    }
    return text;
  }

  private parse(line: string): Json {
    let parsed: unknown;
    try {
      parsed = JSON.parse(this.line === 1 ? line.replace(/^\uFEFF/, '') : line);
    } catch {
      throw this.fault('is not one whole JSON object. Save the Encounters as NDJSON: each on a line of its own');
    }
    const resource = asObject(parsed);
    if (resource?.resourceType === 'Bundle')
      throw this.fault('is a Bundle. Save its Encounters as NDJSON: each on a line of its own, without the Bundle');
    if (resource?.resourceType !== 'Encounter')
      throw this.fault('is not an Encounter resource of HL7 FHIR R4. Export only Encounters');
    return resource;
  }

  private row(encounter: Json): string[] | null {
    this.facts.encounters += 1;
    if (Array.isArray(encounter.class))
      throw this.fault('gives its class as a list, as FHIR R5 has it. Export Encounters of FHIR R4');
    if (asObject(encounter.class)?.code !== 'EMER') {
      this.facts.otherClass += 1;
      const history: unknown[] = Array.isArray(encounter.classHistory) ? encounter.classHistory : [];
      if (history.some((each) => asObject(asObject(each)?.class)?.code === 'EMER')) this.facts.onceEmergency += 1;
      return null;
    }
    if (notHappenedStatus.has(asText(encounter.status))) {
      this.facts.notHappened += 1;
      return null;
    }
    const period = asObject(encounter.period);
    const stays = staysOf(encounter.location, asText(period?.end));
    return [
      asText(period?.start),
      stays.find(({ isBed }) => isBed)?.start ?? '',
      asText(period?.end),
      stays.at(0)?.name ?? '',
      longestOf(stays),
      stays.at(-1)?.name ?? '',
      dispositionOf(asObject(encounter.hospitalization)),
    ];
  }

  private fault(what: string): UnreadableFileError {
    return new UnreadableFileError(`Line ${this.line.toLocaleString('en')} ${what}.`);
  }
}

interface Stay {
  name: string;
  start: string;
  end: string;
  isBed: boolean;
}

/** Encounter.location in the order of their periods; those without a period keep their place. */
function staysOf(locations: unknown, encounterEnd: string): Stay[] {
  if (!Array.isArray(locations)) return [];
  const stays = locations.flatMap((each): Stay[] => {
    const given = asObject(each);
    const reference = asObject(given?.location);
    const status = asText(given?.status);
    if (!given || status === 'planned' || status === 'reserved') return [];
    const period = asObject(given.period);
    const codings = asObject(given.physicalType)?.coding;
    return [
      {
        name: asText(reference?.display) || asText(reference?.reference),
        start: asText(period?.start),
        end: asText(period?.end) || encounterEnd,
        // HL7 terminology location-physical-type: bd is a bed.
        isBed: Array.isArray(codings) && codings.some((coding) => asObject(coding)?.code === 'bd'),
      },
    ];
  });
  const known = stays.every(({ start }) => !Number.isNaN(Date.parse(start)));
  return known ? stays.sort((a, b) => Date.parse(a.start) - Date.parse(b.start)) : stays;
}

/** The name under which the most time was spent; the first if times are missing. */
function longestOf(stays: readonly Stay[]): string {
  const spent = new Map<string, number>();
  for (const { name, start, end } of stays) {
    const time = Date.parse(end) - Date.parse(start);
    spent.set(name, (spent.get(name) ?? 0) + (Number.isNaN(time) ? 0 : time));
  }
  let longest = '';
  let most = -1;
  for (const [name, time] of spent) if (time > most) [longest, most] = [name, time];
  return longest;
}

function dispositionOf(hospitalization: Json | null): string {
  const concept = asObject(hospitalization?.dischargeDisposition);
  if (!concept) return '';
  const codings = Array.isArray(concept.coding) ? concept.coding.map(asObject) : [];
  const standard = codings.find((coding) => coding?.system === dispositionSystem);
  const display = standard ? dispositionDisplays[asText(standard.code)] : undefined;
  const first = codings.at(0);
  return display ?? (asText(first?.display) || asText(first?.code) || asText(concept.text));
}

function asObject(value: unknown): Json | null {
  return typeof value === 'object' && value !== null && !Array.isArray(value) ? (value as Json) : null;
}

function asText(value: unknown): string {
  return typeof value === 'string' ? value.trim() : '';
}
