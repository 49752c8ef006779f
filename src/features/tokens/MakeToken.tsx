import { useState } from 'react';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { tokenPurposeNames, tokenPurposes, type TokenPurpose } from '../../../shared/domain/token-purpose.ts';
import { Button } from '../../components/Button.tsx';
import { SelectField, TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import type { TokenWish } from './queries.ts';

/** Asks for what a new token needs: with sites to choose from, for any of them and any purpose; else its name alone. */
export function MakeToken({
  siteId,
  sites,
  making,
  error,
  onMake,
}: {
  /** The site that it is for; null: to be chosen. */
  siteId: string | null;
  sites: readonly { id: string; name: string }[];
  making: boolean;
  error: unknown;
  /** Calls `done` once the token is made, so that the next begins empty. */
  onMake: (wish: TokenWish, done: () => void) => void;
}) {
  const [chosen, setChosen] = useState('');
  const [purpose, setPurpose] = useState<TokenPurpose>(siteId === null ? 'census' : 'visit-log');
  const [name, setName] = useState('');
  const [tried, setTried] = useState(false);
  const kind = screenNote(name);
  const site = siteId ?? chosen;
  const siteFault = site === '' ? 'Choose the site.' : undefined;
  const nameFault =
    kind !== null
      ? `This looks like ${withArticle(kind)}. Name the system that will use the token.`
      : name.trim().length < 3
        ? 'Name the system that will use it, in 3 characters or more.'
        : undefined;
  return (
    <form
      className="grid max-w-xl gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        setTried(true);
        if (siteFault || nameFault) return;
        onMake({ siteId: site, purpose, name: name.trim() }, () => {
          setName('');
          setTried(false);
        });
      }}
    >
      {siteId === null ? (
        <>
          <SelectField
            label="Site"
            value={chosen}
            error={tried ? siteFault : undefined}
            onChange={(event) => setChosen(event.target.value)}
            options={[
              { value: '', label: 'Choose a site', disabled: true },
              ...sites.map(({ id, name: label }) => ({ value: id, label })),
            ]}
          />
          <SelectField
            label="What it lets a system do"
            hint="Nothing else, and at this site only."
            value={purpose}
            onChange={(event) => setPurpose(event.target.value as TokenPurpose)}
            options={tokenPurposes.map((value) => ({ value, label: tokenPurposeNames[value] }))}
          />
        </>
      ) : null}
      <TextField
        label="Which system uses it"
        hint="For instance: bed board, nightly extract. The audit trail carries this name."
        maxLength={80}
        value={name}
        error={tried || kind !== null ? nameFault : undefined}
        onChange={(event) => setName(event.target.value)}
      />
      {error ? <ProblemNotice error={error} /> : null}
      <Button type="submit" className="justify-self-start" busy={making} busyText="Making…">
        Make the token
      </Button>
    </form>
  );
}
