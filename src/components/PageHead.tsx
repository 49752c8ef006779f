import { useEffect } from 'react';
import type { ReactNode } from 'react';

/** The head of a page: the answer as a sentence, what it means, and quiet facts at the side. Names the browser's tab. */
export function PageHead({
  tab,
  title,
  lede,
  aside,
}: {
  /** What the browser's tab says before the product's name. */
  tab: string;
  title: ReactNode;
  lede?: ReactNode;
  aside?: ReactNode;
}) {
  useDocumentTitle(tab);
  return (
    <header className="page-pad flex flex-wrap items-start justify-between gap-x-10 gap-y-2 pt-4 pb-3">
      <div className="min-w-0 flex-[1_1_36rem]">
        <h1 className="text-headline-phone text-ink sm:text-headline-tablet lg:text-headline print:text-headline-phone">
          {title}
        </h1>
        {lede ? <div className="mt-1.5 text-lede text-ink2">{lede}</div> : null}
      </div>
      {aside ? <div className="text-side text-ink2">{aside}</div> : null}
    </header>
  );
}

/** Names the browser's tab. */
export function useDocumentTitle(title: string): void {
  useEffect(() => {
    document.title = `${title} · Shoalmark`;
  }, [title]);
}
