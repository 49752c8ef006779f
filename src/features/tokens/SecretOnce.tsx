import { useEffect, useId, useRef, useState } from 'react';
import { Button } from '../../components/Button.tsx';
import { fieldLook } from '../../components/Field.tsx';
import { Notice } from '../../components/Notice.tsx';

/** A new token's secret, this once: to be copied, then gone. */
export function SecretOnce({ name, secret, onKept }: { name: string; secret: string; onKept: () => void }) {
  const id = useId();
  const field = useRef<HTMLInputElement>(null);
  const [copied, setCopied] = useState<'no' | 'yes' | 'by hand'>('no');
  useEffect(() => field.current?.focus(), []);
  const copy = async () => {
    try {
      await navigator.clipboard.writeText(secret);
      setCopied('yes');
    } catch {
      // Without TLS, or where the browser forbids it: the text is chosen for copying by hand.
      field.current?.select();
      setCopied('by hand');
    }
  };
  return (
    <Notice kind="caution" title={`The token for “${name}” is made. Copy its secret now: it is not shown again.`}>
      <div className="mt-2 grid max-w-2xl gap-3">
        <label htmlFor={id} className="font-bold text-ink">
          Secret
        </label>
        <input
          id={id}
          ref={field}
          readOnly
          value={secret}
          autoComplete="off"
          spellCheck={false}
          className={fieldLook}
          onFocus={(event) => event.target.select()}
        />
        <p>
          The system sends it with every call, in the header <code>Authorization: Bearer</code>. Whoever has it can send
          data in this site’s name: keep it as you keep a password.
        </p>
        <div className="flex flex-wrap items-center gap-4">
          <Button onClick={() => void copy()}>Copy the secret</Button>
          <Button look="second" onClick={onKept}>
            I have kept it
          </Button>
          <span role="status" className="font-bold text-ink">
            {copied === 'yes' ? 'Copied.' : copied === 'by hand' ? 'Chosen: copy it with your keyboard.' : ''}
          </span>
        </div>
      </div>
    </Notice>
  );
}
