import { useRef, useState } from 'react';
import type { InstallationSite } from '../../../shared/api/installation.ts';
import { Button } from '../../components/Button.tsx';
import { Dialog } from '../../components/Dialog.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { useOrderAreas } from './queries.ts';

/** Sets the order in which every page of the site names its care areas. Nothing is saved before it is asked for. */
export function AreaOrder({ site, open, onClose }: { site: InstallationSite; open: boolean; onClose: () => void }) {
  return (
    <Dialog title="Change the order" open={open} onClose={onClose}>
      <OrderForm site={site} onClose={onClose} />
    </Dialog>
  );
}

/** Lives as long as the dialog is open: each opening begins with the order as it is saved. */
function OrderForm({ site, onClose }: { site: InstallationSite; onClose: () => void }) {
  const save = useOrderAreas(site.id);
  const [areas, setAreas] = useState(site.areas);
  const [told, setTold] = useState('');
  const list = useRef<HTMLOListElement>(null);
  const changed = areas.some(({ id }, index) => id !== site.areas[index]?.id);

  function move(from: number, to: number) {
    const area = areas[from];
    setAreas(areas.toSpliced(from, 1).toSpliced(to, 0, area));
    setTold(`${area.name} is now ${String(to + 1)} of ${String(areas.length)}.`);
    // At an end the button that was pressed goes dead: the focus goes to its neighbour instead of nowhere.
    const dead = to === 0 ? 'up' : to === areas.length - 1 ? 'down' : null;
    if (dead !== null) {
      const other = dead === 'up' ? 'down' : 'up';
      list.current?.querySelector<HTMLButtonElement>(`[data-area="${area.id}"] [data-way="${other}"]`)?.focus();
    }
  }

  return (
    <form
      className="grid gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        if (!changed) return;
        save.mutate(
          areas.map(({ id }) => id),
          { onSuccess: onClose },
        );
      }}
    >
      <p className="text-ink2">
        Every page of the site, the census and the handover sheet name the areas in this order. No figure moves.
      </p>
      <ol ref={list} className="grid max-w-xl">
        {areas.map((area, index) => (
          <li
            key={area.id}
            data-area={area.id}
            className="flex flex-wrap items-center gap-x-4 border-b border-hair py-1.5"
          >
            <span className="w-6 text-right text-ink2">{index + 1}</span>
            <b className="min-w-36 flex-1 break-words">{area.name}</b>
            {(['up', 'down'] as const).map((way) => {
              const to = way === 'up' ? index - 1 : index + 1;
              return (
                <Button
                  key={way}
                  look="quiet"
                  className="min-h-11 min-w-11"
                  data-way={way}
                  aria-label={`Move ${area.name} ${way}`}
                  disabled={to < 0 || to >= areas.length}
                  onClick={() => move(index, to)}
                >
                  {way === 'up' ? 'Up' : 'Down'}
                </Button>
              );
            })}
          </li>
        ))}
      </ol>
      <p role="status" className="sr-only">
        {told}
      </p>
      {save.error ? <ProblemNotice error={save.error} /> : null}
      <div className="flex flex-wrap items-center gap-4">
        <Button type="submit" disabled={!changed} busy={save.isPending} busyText="Saving…">
          Save the order
        </Button>
        {changed ? null : <span className="text-ink2">This is the order as it is saved.</span>}
      </div>
    </form>
  );
}
