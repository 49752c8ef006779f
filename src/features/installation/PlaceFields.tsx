import { SelectField, TextField } from '../../components/Field.tsx';

export interface SitePlace {
  name: string;
  groupId: string;
  timeZone: string;
  country: string;
  /** Empty: the whole country. */
  region: string;
}

export interface PlaceChoices {
  timeZones: readonly string[];
  countries: readonly { code: string; name: string; regions: readonly { code: string; name: string }[] }[];
}

export type PlaceFaults = Partial<Record<keyof SitePlace, string | undefined>>;

export function placeFaults(place: SitePlace): PlaceFaults {
  return {
    name: place.name.trim().length < 2 ? 'Name the site.' : undefined,
    groupId: place.groupId === '' ? 'Choose the group.' : undefined,
    timeZone: place.timeZone === '' ? 'Choose the time zone.' : undefined,
    country: place.country === '' ? 'Choose the country.' : undefined,
  };
}

/** Where a site is: all its local times and public holidays follow from it. */
export function PlaceFields({
  place,
  groups,
  choices,
  faults,
  zoneFixed,
  onPlace,
}: {
  place: SitePlace;
  groups: readonly { id: string; name: string }[];
  choices: PlaceChoices;
  faults: PlaceFaults;
  /** Data stands on the time zone. */
  zoneFixed: boolean;
  onPlace: (place: SitePlace) => void;
}) {
  const regions = choices.countries.find(({ code }) => code === place.country)?.regions ?? [];
  return (
    <div className="grid items-end gap-4 sm:grid-cols-2 lg:grid-cols-3">
      <TextField
        label="Name of the site"
        maxLength={80}
        value={place.name}
        error={faults.name}
        onChange={(event) => onPlace({ ...place, name: event.target.value })}
      />
      <SelectField
        label="Health group"
        value={place.groupId}
        error={faults.groupId}
        onChange={(event) => onPlace({ ...place, groupId: event.target.value })}
        options={[
          { value: '', label: 'Choose the group', disabled: true },
          ...groups.map(({ id, name }) => ({ value: id, label: name })),
        ]}
      />
      <SelectField
        label="Time zone"
        hint={zoneFixed ? 'Data stands on it; it stays.' : undefined}
        disabled={zoneFixed}
        value={place.timeZone}
        error={faults.timeZone}
        onChange={(event) => onPlace({ ...place, timeZone: event.target.value })}
        options={[
          { value: '', label: 'Choose the time zone', disabled: true },
          ...choices.timeZones.map((zone) => ({ value: zone, label: zone.replaceAll('_', ' ') })),
        ]}
      />
      <SelectField
        label="Country, for public holidays"
        value={place.country}
        error={faults.country}
        onChange={(event) => onPlace({ ...place, country: event.target.value, region: '' })}
        options={[
          { value: '', label: 'Choose the country', disabled: true },
          ...choices.countries.map(({ code, name }) => ({ value: code, label: name })),
        ]}
      />
      {regions.length > 0 ? (
        <SelectField
          label="Region"
          value={place.region}
          onChange={(event) => onPlace({ ...place, region: event.target.value })}
          options={[
            { value: '', label: 'The whole country' },
            ...regions.map(({ code, name }) => ({ value: code, label: name })),
          ]}
        />
      ) : null}
    </div>
  );
}
