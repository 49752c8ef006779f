import { Button } from '../../components/Button.tsx';
import { formatBytes } from './format-bytes.ts';

/** Work on a file under way: what is done, how many bytes of how many, and a way to stop it. */
export function Progress({
  title,
  bytes,
  total,
  onCancel,
  doneText,
}: {
  title: string;
  bytes: number;
  total: number;
  onCancel: () => void;
  /** Stands in place of the figures once every byte is through and the work still goes on. */
  doneText: string;
}) {
  const through = total > 0 && bytes >= total;
  const figures = through ? doneText : `${formatBytes(bytes)} of ${formatBytes(total)}`;
  return (
    <div className="grid max-w-xl gap-2" role="group" aria-label={title}>
      <h2 className="text-section">{title}</h2>
      {through ? (
        <progress className="progress-bar" aria-label={title} />
      ) : (
        <progress className="progress-bar" value={bytes} max={Math.max(1, total)} aria-label={title} />
      )}
      <p className="text-ink2" role="status">
        {figures}
      </p>
      <Button look="second" className="justify-self-start" onClick={onCancel}>
        Cancel
      </Button>
    </div>
  );
}
