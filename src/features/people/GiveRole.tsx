import { useState } from 'react';
import { Button } from '../../components/Button.tsx';
import { TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { endOfDay } from './end-of-day.ts';
import { emptyPlace, PlaceFields, placeOf, type Choices } from './PlaceFields.tsx';
import { useGiveRole } from './queries.ts';

/** Gives a person a role; it acts at their next request. */
export function GiveRole({ personId, choices, timeZone }: { personId: string; choices: Choices; timeZone: string }) {
  const give = useGiveRole(personId);
  const [draft, setDraft] = useState(emptyPlace);
  const [day, setDay] = useState('');
  const [tried, setTried] = useState(false);
  const zone = choices.sites.find(({ id }) => draft.place === `site ${id}`)?.timeZone ?? timeZone;
  return (
    <form
      aria-label="Give a role"
      className="grid max-w-4xl gap-4 sm:grid-cols-3"
      onSubmit={(event) => {
        event.preventDefault();
        setTried(true);
        const wish = placeOf(draft);
        if (!wish) return;
        give.mutate(
          { ...wish, endsAt: endOfDay(day, zone) },
          {
            onSuccess: () => {
              setDraft(emptyPlace);
              setDay('');
              setTried(false);
            },
          },
        );
      }}
    >
      <PlaceFields choices={choices} draft={draft} tried={tried} onDraft={setDraft} />
      <TextField
        label="Last day (empty: no end)"
        type="date"
        value={day}
        onChange={(event) => setDay(event.target.value)}
      />
      {give.error ? <ProblemNotice error={give.error} className="sm:col-span-3" /> : null}
      <Button type="submit" className="justify-self-start" busy={give.isPending} busyText="Giving…">
        Give the role
      </Button>
    </form>
  );
}
