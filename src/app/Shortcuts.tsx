import { useEffect, useRef, useState } from 'react';
import { useNavigate } from 'react-router-dom';
import { Dialog } from '../components/Dialog.tsx';

/** A place that "g" and a letter lead to. */
export interface ShortcutPlace {
  key: string;
  name: string;
  to: string;
}

const storageKey = 'single-key-shortcuts';
const goSeconds = 1.5;

function readSwitch(): boolean {
  try {
    return localStorage.getItem(storageKey) !== 'off';
  } catch {
    return true;
  }
}

function isTyping(target: EventTarget | null): boolean {
  return target instanceof Element && target.closest('input, select, textarea, [contenteditable]') !== null;
}

function Keys({ keys }: { keys: readonly string[] }) {
  return keys.map((key) => (
    <kbd key={key} className="mr-1 inline-block min-w-7 rounded-field border border-edge px-1.5 text-center font-bold">
      {key}
    </kbd>
  ));
}

/**
 * Keys that work on every page, and their list on "?". Keys without a modifier can be switched off
 * (WCAG 2.1.4), since speech input may press them by chance.
 */
export function Shortcuts({
  places,
  open,
  onOpen,
  onClose,
}: {
  places: readonly ShortcutPlace[];
  open: boolean;
  onOpen: () => void;
  onClose: () => void;
}) {
  const navigate = useNavigate();
  const [on, setOn] = useState(readSwitch);
  const goAt = useRef(Number.NEGATIVE_INFINITY);

  useEffect(() => {
    if (!on) return;
    const press = (event: KeyboardEvent) => {
      if (event.ctrlKey || event.metaKey || event.altKey || event.defaultPrevented || isTyping(event.target)) return;
      if (document.querySelector('dialog[open]')) return;
      if (event.key === '?') {
        event.preventDefault();
        onOpen();
        return;
      }
      const place = places.find(({ key }) => key === event.key);
      if (place && event.timeStamp - goAt.current < goSeconds * 1000) {
        event.preventDefault();
        void navigate(place.to);
      }
      goAt.current = event.key === 'g' ? event.timeStamp : Number.NEGATIVE_INFINITY;
    };
    document.addEventListener('keydown', press);
    return () => document.removeEventListener('keydown', press);
  }, [navigate, on, onOpen, places]);

  function turn(next: boolean) {
    setOn(next);
    try {
      if (next) localStorage.removeItem(storageKey);
      else localStorage.setItem(storageKey, 'off');
    } catch {
      // Storage is refused: the choice holds until the page is left.
    }
  }

  const rows: readonly { keys: readonly string[]; does: string }[] = [
    { keys: ['?'], does: 'This list' },
    ...places.map(({ key, name }) => ({ keys: ['g', key], does: name })),
    { keys: ['Enter'], does: 'In a census field: save the census' },
    { keys: ['←', '→'], does: 'On the hours of Tonight: six hours earlier or later' },
    { keys: ['Home', 'End'], does: 'On the hours of Tonight: back to now, to the last hour' },
    { keys: ['←', '→', '↑', '↓'], does: 'On the hours of a week: the next hour or day' },
    { keys: ['Esc'], does: 'Close a list or a question' },
  ];
  return (
    <Dialog title="Keyboard shortcuts" open={open} onClose={onClose}>
      <dl className="grid grid-cols-[auto_1fr] items-baseline gap-x-6 gap-y-2">
        {rows.map(({ keys, does }) => (
          <div key={does} className="contents">
            <dt className="whitespace-nowrap">
              <Keys keys={keys} />
            </dt>
            <dd className="text-ink2">{does}</dd>
          </div>
        ))}
      </dl>
      <label className="mt-5 flex min-h-11 items-center gap-3 font-bold">
        <input
          type="checkbox"
          className="size-5 accent-act"
          checked={on}
          onChange={(event) => turn(event.target.checked)}
        />
        Letter keys work. Switch them off if you dictate.
      </label>
    </Dialog>
  );
}
