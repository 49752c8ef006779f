import { useState } from 'react';
import { useNavigate } from 'react-router-dom';
import { readMailAddress } from '../../../shared/domain/mail-address.ts';
import { paths } from '../../app/paths.ts';
import { Button } from '../../components/Button.tsx';
import { TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { useInvite } from './queries.ts';

/** Names somebody before their first sign-in; their page comes next, for the roles. */
export function InvitePerson() {
  const invite = useInvite();
  const navigate = useNavigate();
  const [name, setName] = useState('');
  const [email, setEmail] = useState('');
  const [tried, setTried] = useState(false);
  const nameFault = name.trim().length < 2 ? 'Enter the person’s name.' : undefined;
  const emailFault =
    readMailAddress(email) === null ? 'Enter one e-mail address, as the hospital account has it.' : undefined;
  return (
    <form
      className="grid max-w-3xl gap-4 sm:grid-cols-2"
      onSubmit={(event) => {
        event.preventDefault();
        setTried(true);
        if (nameFault || emailFault) return;
        invite.mutate(
          { name: name.trim(), email },
          { onSuccess: ({ person }) => void navigate(paths.person(person.id)) },
        );
      }}
    >
      <TextField
        label="Name"
        maxLength={120}
        value={name}
        error={tried ? nameFault : undefined}
        onChange={(event) => setName(event.target.value)}
      />
      <TextField
        label="E-mail address"
        type="email"
        maxLength={254}
        value={email}
        error={tried ? emailFault : undefined}
        onChange={(event) => setEmail(event.target.value)}
      />
      {invite.error ? <ProblemNotice error={invite.error} className="sm:col-span-2" /> : null}
      <Button type="submit" className="justify-self-start" busy={invite.isPending} busyText="Inviting…">
        Invite and give roles
      </Button>
    </form>
  );
}
