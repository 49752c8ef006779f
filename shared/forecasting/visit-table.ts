/**
 * Visits in columns, one entry a visit, in any order. Instants are UTC seconds; NaN where not
 * recorded. `disposition` holds the codes of shared/domain/disposition, 255 where unknown;
 * `byAmbulance` 1, 0, or 255 where unknown; `area` indexes the site's list of care areas.
 */
export interface VisitTable {
  length: number;
  area: Uint8Array;
  arrivalAt: Float64Array;
  bedSpaceAt: Float64Array;
  admissionDecisionAt: Float64Array;
  departureAt: Float64Array;
  disposition: Uint8Array;
  byAmbulance: Uint8Array;
}

/** What is known of how the rows were selected; it decides exposure and censoring. */
export interface ExtractFacts {
  /** Whether the extract holds the visits that arrived, or those that departed, in its period. */
  selectedBy: 'arrived' | 'departed';
  /** When the extract was taken, UTC seconds. */
  takenAt: number;
  /** What a row without a departure time means. */
  missingDeparture: 'still present' | 'unknown';
}

/** A span taken out of an area's exposure (an outage, a diversion); `area` null means every area. */
export interface ExposureGap {
  area: number | null;
  from: number;
  to: number;
}

/** A calendar day that is not an ordinary one. */
export interface CalendarDay {
  /** Local date YYYY-MM-DD. */
  date: string;
  kind: 'public holiday' | 'local event' | 'closure';
  name: string;
  /** A stated effect on arrivals as a range of factors, for instance [1.1, 1.3]; null lets past days of the same name speak. */
  statedEffect: [low: number, high: number] | null;
}
