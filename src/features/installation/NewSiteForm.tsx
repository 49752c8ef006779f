import { useState } from 'react';
import type { InstallationSite } from '../../../shared/api/installation.ts';
import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { useUnsavedWork } from '../../lib/unsaved-work.ts';
import { AreaFields } from './AreaFields.tsx';
import { emptyArea, readAreas, type AreaDraft } from './area-draft.ts';
import { PlaceFields, placeFaults, type PlaceChoices, type SitePlace } from './PlaceFields.tsx';
import { useMakeSite } from './queries.ts';

const firstAreas: AreaDraft[] = [
  { ...emptyArea, name: 'Resuscitation' },
  { ...emptyArea, name: 'Acute' },
];

/** Asks for everything that a site begins with. */
export function NewSiteForm({
  groups,
  choices,
  onMade,
}: {
  groups: readonly { id: string; name: string }[];
  choices: PlaceChoices;
  onMade: (site: InstallationSite) => void;
}) {
  const make = useMakeSite();
  const [place, setPlace] = useState<SitePlace>({
    name: '',
    groupId: groups.length === 1 ? groups[0].id : '',
    timeZone: choices.timeZones.find((zone) => zone === Intl.DateTimeFormat().resolvedOptions().timeZone) ?? '',
    country: '',
    region: '',
  });
  const [areas, setAreas] = useState(firstAreas);
  const [tried, setTried] = useState(false);
  const faults = placeFaults(place);
  const read = readAreas(areas);
  const sound = read.sound && Object.values(faults).every((fault) => fault === undefined);
  useUnsavedWork(place.name.trim() !== '' && !make.isSuccess, 'a site that is not made yet');
  return (
    <form
      className="grid grid-cols-1 gap-8"
      onSubmit={(event) => {
        event.preventDefault();
        setTried(true);
        if (!sound) return;
        const body = { ...place, name: place.name.trim(), region: place.region || null, areas: read.bodies };
        make.mutate(body, { onSuccess: onMade });
      }}
    >
      <section className="grid grid-cols-1 gap-4" aria-labelledby="where">
        <h2 id="where" className="text-section">
          Where it is
        </h2>
        <PlaceFields
          place={place}
          groups={groups}
          choices={choices}
          faults={tried ? faults : {}}
          zoneFixed={false}
          onPlace={setPlace}
        />
      </section>
      <section className="grid grid-cols-1 gap-6" aria-labelledby="areas">
        <div>
          <h2 id="areas" className="text-section">
            Care areas
          </h2>
          <p className="max-w-[58rem] text-ink2">
            In the order in which the site names them. Nothing is ever planned or suggested below the safe minimum: take
            it from the site’s own safe-staffing policy.
          </p>
        </div>
        {areas.map((draft, index) => (
          // A place in the list is all that a draft has.
          <fieldset key={index} className="grid gap-3 border-l-4 border-hair pl-4">
            <legend className="sr-only">Area {index + 1}</legend>
            <AreaFields
              draft={draft}
              faults={tried ? read.faults[index] : {}}
              onDraft={(changed) => setAreas(areas.with(index, changed))}
            />
            {areas.length > 1 ? (
              <Button
                look="quiet"
                className="justify-self-start"
                aria-label={`Leave area ${String(index + 1)} out`}
                onClick={() => setAreas(areas.toSpliced(index, 1))}
              >
                Leave out
              </Button>
            ) : null}
          </fieldset>
        ))}
        <Button look="second" className="justify-self-start" onClick={() => setAreas([...areas, emptyArea])}>
          Another area
        </Button>
      </section>
      {make.error ? <ProblemNotice error={make.error} /> : null}
      {tried && !sound ? (
        <p role="alert" className="font-bold text-warn">
          Nothing was made yet: correct the fields that say so.
        </p>
      ) : null}
      <Button type="submit" className="justify-self-start" busy={make.isPending} busyText="Making…">
        Make the site
      </Button>
    </form>
  );
}
