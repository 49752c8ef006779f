import { useState } from 'react';
import type { HeldRole, PersonReply } from '../../../shared/api/people.ts';
import { roleNames } from '../../../shared/domain/permission.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { Dialog } from '../../components/Dialog.tsx';
import { TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatDate } from '../../lib/format.ts';
import { endOfDay, lastDay } from './end-of-day.ts';
import { useChangeRoleEnd, useRemoveRole } from './queries.ts';

/** The roles that a person holds by name, where their end is set and where they are taken away. */
export function HeldRoles({ person, timeZone }: { person: PersonReply; timeZone: string }) {
  const change = useChangeRoleEnd(person.id);
  const remove = useRemoveRole(person.id);
  const [asked, setAsked] = useState<HeldRole | null>(null);
  const [day, setDay] = useState('');
  const close = () => {
    setAsked(null);
    change.reset();
    remove.reset();
  };
  return (
    <>
      <DataTable
        caption="Roles by name"
        captionHidden
        rows={person.roles}
        rowKey={({ id }) => id}
        empty="No role by name yet. Give one below."
        columns={[
          { key: 'role', header: 'Role', rowHeader: true, cell: ({ role }) => roleNames[role] },
          { key: 'place', header: 'Where', cell: ({ placeName }) => placeName },
          {
            key: 'end',
            header: 'Last day',
            cell: ({ endsAt, ended }) =>
              endsAt === null ? 'No end' : `${ended ? 'Ended ' : ''}${formatDate(endsAt - 1, timeZone)}`,
          },
          {
            key: 'change',
            header: <span className="sr-only">Change</span>,
            cell: (held) => (
              <Button
                look="quiet"
                aria-label={`Change ${roleNames[held.role]}, ${held.placeName}`}
                onClick={() => {
                  setDay(held.endsAt === null ? '' : lastDay(held.endsAt, timeZone));
                  setAsked(held);
                }}
              >
                Change
              </Button>
            ),
          },
        ]}
      />
      <Dialog title={asked ? `${roleNames[asked.role]}, ${asked.placeName}` : ''} open={asked !== null} onClose={close}>
        <form
          className="grid max-w-md gap-4"
          onSubmit={(event) => {
            event.preventDefault();
            if (asked) change.mutate({ roleId: asked.id, endsAt: endOfDay(day, timeZone) }, { onSuccess: close });
          }}
        >
          <TextField
            label="Last day"
            hint="Empty: no end."
            type="date"
            value={day}
            onChange={(event) => setDay(event.target.value)}
          />
          {change.error ? <ProblemNotice error={change.error} /> : null}
          {remove.error ? <ProblemNotice error={remove.error} /> : null}
          <div className="flex flex-wrap gap-4">
            <Button type="submit" busy={change.isPending} busyText="Saving…">
              Save the last day
            </Button>
            <Button
              look="second"
              busy={remove.isPending}
              busyText="Taking away…"
              onClick={() => {
                if (asked) remove.mutate(asked.id, { onSuccess: close });
              }}
            >
              Take the role away now
            </Button>
          </div>
        </form>
      </Dialog>
    </>
  );
}
