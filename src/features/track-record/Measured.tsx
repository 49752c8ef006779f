import { useRef } from 'react';
import type { ReactNode } from 'react';
import { PictureTools } from '../../components/PictureTools.tsx';
import { useWidth } from '../../lib/use-width.ts';

/** Room for a drawing that is told its width; nothing is drawn before it is known. */
export function Measured({ height, children }: { height: number; children: (width: number) => ReactNode }) {
  const [ref, width] = useWidth<HTMLDivElement>();
  return (
    <div ref={ref} className="overflow-x-clip" style={{ minHeight: height }}>
      {width > 0 ? children(width) : null}
    </div>
  );
}

/** One drawing: its name, what it means in a sentence, the drawing, and the same as a table. */
export function Finding({
  title,
  sentence,
  choice,
  drawing,
  table,
}: {
  title: string;
  sentence: ReactNode;
  /** What of it is drawn, where there is a choice. */
  choice?: ReactNode;
  drawing: ReactNode;
  table: ReactNode;
}) {
  const ref = useRef<HTMLDivElement>(null);
  return (
    <section className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-2" aria-label={title}>
      <h2 className="text-h2">{title}</h2>
      <p className="max-w-[44rem] text-ink2">{sentence}</p>
      {choice ? <div className="max-w-md">{choice}</div> : null}
      <div ref={ref}>{drawing}</div>
      <PictureTools of={ref} title={title} />
      <details>
        <summary className="link inline-block min-h-6 cursor-pointer font-semibold text-ink2">
          The same as a table
        </summary>
        <div className="pt-2">{table}</div>
      </details>
    </section>
  );
}
