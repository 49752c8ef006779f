import { Notice } from '../../components/Notice.tsx';
import { asApiError } from '../../lib/api-error.ts';
import { formatAge, formatTime } from '../../lib/format.ts';

/** Where the newest outlook could not be loaded: how old the one on the page is, and what is not possible meanwhile. */
export function StaleNote({
  issuedAt,
  now,
  timeZone,
  error,
  fromDevice,
  className,
}: {
  /** UTC seconds. */
  issuedAt: number;
  /** The server's clock carried on by this device's, UTC seconds. */
  now: number;
  timeZone: string;
  /** Why it could not be loaded; null while that is being tried. */
  error: unknown;
  /** The outlook is the one that this device kept. */
  fromDevice: boolean;
  className?: string;
}) {
  const title = error ? asApiError(error).title : 'The server cannot be reached';
  return (
    <Notice kind="caution" title={`${title}.`} live {...(className ? { className } : {})}>
      <p>
        {fromDevice ? 'This device kept the outlook' : 'This is the outlook'} of {formatTime(issuedAt, timeZone)},{' '}
        <b className="text-ink">{formatAge(now - issuedAt)} old</b>
        {fromDevice ? '' : ', as it was last loaded'}.{' '}
        <b className="text-ink">Nothing can be saved until the server answers.</b> What you type stays in its field for
        a quarter of an hour; what is done meanwhile, write down. The page tries again by itself.
      </p>
    </Notice>
  );
}
