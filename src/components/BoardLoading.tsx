import { ProblemNotice } from './Notice.tsx';
import { Skeleton } from './Skeleton.tsx';

/** What is read of a request of the query cache. */
interface Part {
  data: unknown;
  error: unknown;
  isFetching: boolean;
  refetch: () => unknown;
}

/** Stands for a board whose parts are not all there yet, or says which failed, with a way to try again. */
export function BoardLoading({ parts, label, rows = 0 }: { parts: readonly Part[]; label: string; rows?: number }) {
  const failed = parts.find((part) => part.error && !part.data);
  if (!failed) return <BoardSkeleton label={label} rows={rows} />;
  return (
    <div className="page-pad max-w-3xl py-8">
      <ProblemNotice
        error={failed.error}
        retrying={failed.isFetching}
        onRetry={() => {
          for (const part of parts) void part.refetch();
        }}
      />
    </div>
  );
}

/** Holds the place of a board's sentence and of its rows. */
export function BoardSkeleton({ label, rows }: { label: string; rows: number }) {
  return (
    <div className="page-pad min-h-dvh pt-4">
      <Skeleton className="h-11 w-3/5" label={label} />
      <Skeleton className="mt-3 h-6 w-2/5" />
      <div className="mt-8 grid gap-6">
        {Array.from({ length: rows }, (_, index) => (
          <div key={index} className="flex gap-6">
            <Skeleton className="h-20 w-gutter shrink-0" />
            <Skeleton className="h-20 flex-1 max-sm:hidden" />
          </div>
        ))}
      </div>
    </div>
  );
}
