import { useState } from 'react';
import { Button } from '../../components/Button.tsx';
import { Dialog } from '../../components/Dialog.tsx';
import { TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { useMakeGroup, useRenameGroup } from './queries.ts';

/** Health groups: sites under one management. */
export function HealthGroups({ groups }: { groups: readonly { id: string; name: string }[] }) {
  const make = useMakeGroup();
  const rename = useRenameGroup();
  const [name, setName] = useState('');
  const [tried, setTried] = useState(false);
  const [asked, setAsked] = useState<{ id: string; name: string } | null>(null);
  const fault = (text: string) => (tried && text.trim().length < 2 ? 'Name the group.' : undefined);
  const close = () => {
    setAsked(null);
    rename.reset();
  };
  return (
    <>
      <ul className="grid gap-1">
        {groups.map((group) => (
          <li key={group.id} className="flex items-center gap-4">
            <b>{group.name}</b>
            <Button look="quiet" aria-label={`Rename ${group.name}`} onClick={() => setAsked(group)}>
              Rename
            </Button>
          </li>
        ))}
      </ul>
      <form
        aria-label="Add a group"
        className="flex max-w-xl flex-wrap items-end gap-4"
        onSubmit={(event) => {
          event.preventDefault();
          setTried(true);
          if (name.trim().length < 2) return;
          make.mutate(name.trim(), {
            onSuccess: () => {
              setName('');
              setTried(false);
            },
          });
        }}
      >
        <div className="min-w-52 flex-1">
          <TextField
            label="Name of a health group"
            maxLength={80}
            value={name}
            error={fault(name)}
            onChange={(event) => setName(event.target.value)}
          />
        </div>
        <Button type="submit" look="second" busy={make.isPending} busyText="Adding…">
          Add the group
        </Button>
      </form>
      {make.error ? <ProblemNotice error={make.error} /> : null}
      <Dialog title="Rename the group" open={asked !== null} onClose={close}>
        <form
          className="grid max-w-md gap-4"
          onSubmit={(event) => {
            event.preventDefault();
            if (asked && asked.name.trim().length > 1)
              rename.mutate({ groupId: asked.id, name: asked.name.trim() }, { onSuccess: close });
          }}
        >
          <TextField
            label="Name"
            maxLength={80}
            value={asked?.name ?? ''}
            error={asked && asked.name.trim().length < 2 ? 'Name the group.' : undefined}
            onChange={(event) => setAsked(asked && { ...asked, name: event.target.value })}
          />
          {rename.error ? <ProblemNotice error={rename.error} /> : null}
          <Button type="submit" className="justify-self-start" busy={rename.isPending} busyText="Saving…">
            Save the name
          </Button>
        </form>
      </Dialog>
    </>
  );
}
