import Holidays from 'date-holidays';

/** A country whose public holidays are known, with its regions, by ISO 3166 code. */
export interface HolidayCountry {
  code: string;
  name: string;
  regions: { code: string; name: string }[];
}

let known: HolidayCountry[] | null = null;

/** Every country whose public holidays are known, by name. Gathered once. */
export function holidayCountries(): HolidayCountry[] {
  if (known) return known;
  const calendar = new Holidays();
  // The package answers with nothing at all for a country without regions, whatever its types say.
  const named = (found: unknown) =>
    Object.entries((found ?? {}) as Record<string, string>)
      .map(([code, name]) => ({ code, name }))
      .sort((a, b) => a.name.localeCompare(b.name, 'en'));
  known = named(calendar.getCountries('en'))
    // Codes of the package's own stand beside those of the standard.
    .filter(({ code }) => /^[A-Z]{2}$/.test(code))
    .map(({ code, name }) => ({ code, name, regions: named(calendar.getStates(code, 'en')) }));
  return known;
}
