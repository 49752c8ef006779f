import * as Toast from '@radix-ui/react-toast';
import type { Announcement } from '../lib/announce.ts';

/** How long a result stands; twice as long where it can be undone. Pointer or focus on it stops the clock. */
const standsFor = 6000;

/** Results told in passing, at the foot of the window: F8 brings the keyboard to them, Escape or a swipe puts one away. */
export function Toasts({ list, onGone }: { list: readonly Announcement[]; onGone: (id: number) => void }) {
  return (
    <Toast.Provider label="Result" swipeDirection="down">
      {list.map(({ id, text, undo }) => (
        <Toast.Root
          key={id}
          duration={undo ? standsFor * 2 : standsFor}
          onOpenChange={(open) => {
            if (!open) onGone(id);
          }}
          className="flex items-center justify-between gap-4 border-t-[3px] border-act bg-paper py-2 pr-2 pl-4 text-ink"
        >
          <Toast.Description className="min-w-0 font-bold">{text}</Toast.Description>
          <span className="flex shrink-0 gap-1">
            {undo ? (
              <Toast.Action
                altText="Undo it where you did it"
                onClick={undo}
                className="min-h-11 cursor-pointer rounded-button border-2 border-act px-4 font-extrabold text-act hover:bg-act-soft"
              >
                Undo
              </Toast.Action>
            ) : null}
            <Toast.Close
              aria-label="Put this away"
              className="inline-flex size-11 cursor-pointer items-center justify-center"
            >
              <svg viewBox="0 0 12 12" aria-hidden="true" className="size-3" stroke="currentColor" strokeWidth="2">
                <path d="M1 1L11 11M11 1L1 11" />
              </svg>
            </Toast.Close>
          </span>
        </Toast.Root>
      ))}
      <Toast.Viewport
        label="Results, {hotkey}"
        className="fixed bottom-0 left-1/2 z-50 grid w-[min(34rem,100vw)] -translate-x-1/2 gap-2 p-4 max-lg:bottom-16 print:hidden"
      />
    </Toast.Provider>
  );
}
