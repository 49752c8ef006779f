import { useState } from 'react';
import type { Recipient } from '../../../shared/api/brief-recipients.ts';
import { readMailAddress } from '../../../shared/domain/mail-address.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { Dialog } from '../../components/Dialog.tsx';
import { SelectField, TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { sayRecipientState } from './brief-words.ts';

/** Whom the brief goes to, who was asked and who unsubscribed; each can be removed. */
export function RecipientList({
  recipients,
  timeZone,
  removing,
  error,
  onRemove,
  confirming,
  confirmError,
  onConfirm,
}: {
  recipients: readonly Recipient[];
  timeZone: string;
  removing: boolean;
  error: unknown;
  /** Calls `done` once the recipient is removed. */
  onRemove: (recipientId: string, done: () => void) => void;
  confirming: boolean;
  confirmError: unknown;
  /** Takes an address whose mail came back into use again. */
  onConfirm: (recipientId: string) => void;
}) {
  const [asked, setAsked] = useState<Recipient | null>(null);
  return (
    <>
      {confirmError ? <ProblemNotice error={confirmError} /> : null}
      <DataTable
        caption="Recipients"
        captionHidden
        rows={recipients}
        rowKey={(recipient) => recipient.id}
        empty="Nobody receives the brief yet. Add the first below."
        columns={[
          {
            key: 'name',
            header: 'Recipient',
            rowHeader: true,
            cell: (recipient) => (
              <>
                {recipient.name}
                <span className="block font-normal text-ink2">{recipient.address}</span>
              </>
            ),
          },
          {
            key: 'state',
            header: 'State',
            cell: (recipient) => (
              <span className={recipient.state === 'returned' ? 'font-bold text-ink' : undefined}>
                {sayRecipientState(recipient, timeZone)}
              </span>
            ),
          },
          {
            key: 'remove',
            header: 'Change',
            cell: (recipient) => (
              <div className="grid justify-items-start gap-1">
                {recipient.state === 'returned' ? (
                  <Button
                    look="quiet"
                    className="whitespace-nowrap"
                    busy={confirming}
                    aria-label={`The address of ${recipient.name} is right: send to it again`}
                    onClick={() => onConfirm(recipient.id)}
                  >
                    The address is right
                  </Button>
                ) : null}
                <Button look="quiet" aria-label={`Remove ${recipient.name}`} onClick={() => setAsked(recipient)}>
                  Remove
                </Button>
              </div>
            ),
          },
        ]}
      />
      <Dialog title={`Remove ${asked?.name ?? ''}?`} open={asked !== null} onClose={() => setAsked(null)}>
        <div className="grid gap-4">
          <p className="text-ink2">No brief goes to this address any more, not even one that is on its way now.</p>
          {error ? <ProblemNotice error={error} /> : null}
          <Button
            className="justify-self-start"
            busy={removing}
            busyText="Removing…"
            onClick={() => {
              if (asked) onRemove(asked.id, () => setAsked(null));
            }}
          >
            Remove the recipient
          </Button>
        </div>
      </Dialog>
    </>
  );
}

/** Asks for one more recipient: a person of the site from the list, or an outside address. */
export function AddRecipient({
  people,
  adding,
  error,
  onAdd,
}: {
  people: readonly { name: string; address: string }[];
  adding: boolean;
  error: unknown;
  /** Calls `done` once the recipient is there. */
  onAdd: (wish: { name: string; address: string }, done: () => void) => void;
}) {
  const [chosen, setChosen] = useState('');
  const [name, setName] = useState('');
  const [address, setAddress] = useState('');
  const [tried, setTried] = useState(false);
  const person = people.find((each) => each.address === chosen);
  const nameFault = person || name.trim() !== '' ? undefined : 'Whose address is it?';
  const addressFault =
    person || readMailAddress(address) !== null ? undefined : 'One plain e-mail address, such as name@example.org.';
  return (
    <form
      className="grid max-w-xl gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        setTried(true);
        if (nameFault !== undefined || addressFault !== undefined) return;
        onAdd(person ?? { name: name.trim(), address: address.trim() }, () => {
          setChosen('');
          setName('');
          setAddress('');
          setTried(false);
        });
      }}
    >
      <SelectField
        label="Who"
        value={chosen}
        onChange={(event) => setChosen(event.target.value)}
        options={[
          { value: '', label: 'An outside address' },
          ...people.map((each) => ({ value: each.address, label: `${each.name}, ${each.address}` })),
        ]}
      />
      {person ? null : (
        <>
          <TextField
            label="Name"
            maxLength={100}
            value={name}
            error={tried ? nameFault : undefined}
            onChange={(event) => setName(event.target.value)}
          />
          <TextField
            label="E-mail address"
            hint="It is asked first, and gets nothing else until it has confirmed."
            type="email"
            value={address}
            error={tried ? addressFault : undefined}
            onChange={(event) => setAddress(event.target.value)}
          />
        </>
      )}
      {error ? <ProblemNotice error={error} /> : null}
      <Button type="submit" className="justify-self-start" busy={adding} busyText="Adding…">
        {person ? 'Add the person' : 'Ask the address'}
      </Button>
    </form>
  );
}
