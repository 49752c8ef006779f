import { useState } from 'react';
import type { InstallationSite } from '../../../shared/api/installation.ts';
import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { useUnsavedWork } from '../../lib/unsaved-work.ts';
import { PlaceFields, placeFaults, type PlaceChoices } from './PlaceFields.tsx';
import { useChangeSite } from './queries.ts';

/** Changes where a site is and what it is called. */
export function SitePlaceForm({
  site,
  groups,
  choices,
}: {
  site: InstallationSite;
  groups: readonly { id: string; name: string }[];
  choices: PlaceChoices;
}) {
  const change = useChangeSite(site.id);
  const { name, groupId, timeZone, country, region } = site;
  const stored = { name, groupId, timeZone, country, region: region ?? '' };
  const [place, setPlace] = useState(stored);
  const faults = placeFaults(place);
  const changed = JSON.stringify(place) !== JSON.stringify(stored);
  useUnsavedWork(changed, 'changes to the site that are not saved');
  return (
    <form
      className="grid gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        if (Object.values(faults).some((fault) => fault !== undefined)) return;
        change.mutate({ ...place, name: place.name.trim(), region: place.region || null });
      }}
    >
      <PlaceFields
        place={place}
        groups={groups}
        choices={choices}
        faults={faults}
        zoneFixed={site.hasData}
        onPlace={setPlace}
      />
      {change.error ? <ProblemNotice error={change.error} /> : null}
      <div className="flex items-center gap-4">
        <Button type="submit" look="second" busy={change.isPending} busyText="Saving…">
          Save
        </Button>
        {change.isSuccess && !changed ? <span role="status">Saved.</span> : null}
      </div>
    </form>
  );
}
