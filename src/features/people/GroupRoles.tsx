import { useState } from 'react';
import type { GroupRole } from '../../../shared/api/people.ts';
import { roleNames } from '../../../shared/domain/permission.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatDate } from '../../lib/format.ts';
import { emptyPlace, PlaceFields, placeOf, type Choices } from './PlaceFields.tsx';
import { useMakeGroupRole, useRemoveGroupRole } from './queries.ts';

/** Rules that give a role to everybody in a group of the identity provider. */
export function GroupRoles({
  groupRoles,
  choices,
  timeZone,
}: {
  groupRoles: readonly GroupRole[];
  choices: Choices;
  timeZone: string;
}) {
  const make = useMakeGroupRole();
  const remove = useRemoveGroupRole();
  const [claim, setClaim] = useState('');
  const [draft, setDraft] = useState(emptyPlace);
  const [tried, setTried] = useState(false);
  const claimFault = claim.trim() === '' ? 'Enter the group’s name.' : undefined;
  return (
    <div className="grid grid-cols-1 gap-4">
      <DataTable
        caption="Roles by group"
        captionHidden
        rows={groupRoles}
        rowKey={({ id }) => id}
        empty="No rule. Roles are given by name only."
        columns={[
          { key: 'claim', header: 'Everybody in the group', rowHeader: true, cell: (rule) => rule.claim },
          { key: 'role', header: 'Is', cell: ({ role }) => roleNames[role] },
          { key: 'place', header: 'Where', cell: ({ placeName }) => placeName },
          {
            key: 'made',
            header: 'Made',
            cell: ({ createdAt, createdBy }) => (
              <span className="text-ink2">
                {formatDate(createdAt, timeZone)}, {createdBy}
              </span>
            ),
          },
          {
            key: 'remove',
            header: <span className="sr-only">Remove</span>,
            cell: (rule) => (
              <Button
                look="quiet"
                aria-label={`Remove the rule for ${rule.claim}`}
                busy={remove.isPending && remove.variables === rule.id}
                busyText="Removing…"
                onClick={() => remove.mutate(rule.id)}
              >
                Remove
              </Button>
            ),
          },
        ]}
      />
      {remove.error ? <ProblemNotice error={remove.error} /> : null}
      <form
        aria-label="Add a rule"
        className="grid max-w-4xl gap-4 sm:grid-cols-3"
        onSubmit={(event) => {
          event.preventDefault();
          setTried(true);
          const wish = placeOf(draft);
          if (claimFault || !wish) return;
          make.mutate(
            { ...wish, claim: claim.trim() },
            {
              onSuccess: () => {
                setClaim('');
                setDraft(emptyPlace);
                setTried(false);
              },
            },
          );
        }}
      >
        <TextField
          label="Group of the hospital account"
          maxLength={200}
          value={claim}
          error={tried ? claimFault : undefined}
          onChange={(event) => setClaim(event.target.value)}
        />
        <PlaceFields choices={choices} draft={draft} tried={tried} onDraft={setDraft} />
        {make.error ? <ProblemNotice error={make.error} className="sm:col-span-3" /> : null}
        <Button type="submit" look="second" className="justify-self-start" busy={make.isPending} busyText="Adding…">
          Add the rule
        </Button>
      </form>
    </div>
  );
}
