import { useEffect, useId, useRef, useState } from 'react';
import type { ReactNode } from 'react';
import { Button } from './Button.tsx';
import { fieldLook } from './Field.tsx';
import { Notice } from './Notice.tsx';

/** Something secret that is shown this once: to be copied, then gone. */
export function SecretOnce({
  title,
  label,
  secret,
  copyText,
  onKept,
  children,
}: {
  title: string;
  label: string;
  secret: string;
  /** On the button that copies it. */
  copyText: string;
  onKept: () => void;
  /** What it opens, and how to keep it. */
  children: ReactNode;
}) {
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
    <Notice kind="caution" title={title}>
      <div className="mt-2 grid max-w-2xl gap-3">
        <label htmlFor={id} className="font-bold text-ink">
          {label}
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
        <p>{children}</p>
        <div className="flex flex-wrap items-center gap-4">
          <Button onClick={() => void copy()}>{copyText}</Button>
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
