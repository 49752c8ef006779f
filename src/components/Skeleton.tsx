import { classNames } from '../lib/class-names.ts';

/** Holds the place of what is loading, at its size, so that nothing jumps when it arrives. */
export function Skeleton({ className, label }: { className?: string; label?: string }) {
  return (
    <div
      role={label ? 'status' : undefined}
      data-loading={label ? '' : undefined}
      className={classNames('rounded-field bg-strand-a', className)}
    >
      {label ? <span className="sr-only">{label}</span> : null}
    </div>
  );
}

/** Lines of text that are loading. */
export function SkeletonLines({ lines = 3, label }: { lines?: number; label: string }) {
  return (
    <div role="status" data-loading="" className="grid gap-3">
      <span className="sr-only">{label}</span>
      {Array.from({ length: lines }, (_, index) => (
        <Skeleton key={index} className={classNames('h-5', index === lines - 1 ? 'w-2/3' : 'w-full')} />
      ))}
    </div>
  );
}
