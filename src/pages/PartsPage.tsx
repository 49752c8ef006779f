import { useRef, useState } from 'react';
import type { ReactNode } from 'react';
import { NeedStrip } from '../../shared/charts/NeedStrip.tsx';
import type { NeedColumn } from '../../shared/charts/need-columns.ts';
import { Button } from '../components/Button.tsx';
import { DataTable } from '../components/DataTable.tsx';
import { Dialog } from '../components/Dialog.tsx';
import { SelectField, TextField } from '../components/Field.tsx';
import { Mark } from '../components/Mark.tsx';
import { Notice } from '../components/Notice.tsx';
import { PictureTools } from '../components/PictureTools.tsx';
import { ReadNeed } from '../components/ReadNeed.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { RiskKey } from '../components/RiskKey.tsx';
import { Skeleton } from '../components/Skeleton.tsx';
import { announce } from '../lib/announce.ts';

const colours = {
  'Grounds and ink': ['water', 'paper', 'ink', 'ink2', 'ink3', 'hair', 'edge'],
  'To press, and people arriving': ['act', 'act-soft', 'act-strong', 'f1', 'f2', 'f3'],
  'Need, sure to unsure': ['g1', 'g2', 'g3', 'g4', 'g5', 'g-line'],
  'Shortfall only': ['s1', 's2', 's3', 's4', 's5'],
  'Risk, remote to very likely': ['r1', 'r2', 'r3', 'r4', 'r5'],
  'A count in a cell': ['q1', 'q2', 'q3', 'q4', 'q5'],
  'The day’s light': ['sky1', 'sky2', 'sky3', 'sky4', 'strand-a', 'strand-b'],
};
const sizes = [
  ['text-headline', 'The answer'],
  ['text-lede', 'What would help'],
  ['text-section', 'Whole department'],
  ['text-area', 'An area'],
  ['text-census', '27'],
  ['text-body', 'What is read'],
  ['text-side', 'Beside it'],
  ['text-label', 'A label'],
  ['text-quiet', 'What explains'],
  ['text-small', 'A caption'],
] as const;
const example = Array.from({ length: 400 }, (_, index) => ({
  id: index,
  area: `Area ${String(index + 1)}`,
  beds: (index * 37) % 60,
}));

const hours = Array.from({ length: 12 }, (_, index) => `${String(12 + index)}:00`);
const need = hours.map((_, index): NeedColumn => {
  const middle = 16 + 6 * Math.sin(index / 3);
  return {
    kind: 'forecast',
    at: index * 3600,
    staffed: 20,
    p5: middle - 4,
    p25: middle - 2,
    p50: middle,
    p75: middle + 2,
    p90: middle + 4,
    p95: middle + 5,
  };
});

function Part({ title, children }: { title: string; children: ReactNode }) {
  return (
    <section className="grid gap-3 border-t border-hair pt-4">
      <h2 className="text-section">{title}</h2>
      {children}
    </section>
  );
}

/** /parts, in development only: every part the pages are made of, in the theme that is set. */
export function PartsPage() {
  const [open, setOpen] = useState(false);
  const drawing = useRef<HTMLDivElement>(null);
  return (
    <>
      <PageHead tab="Parts" title="Parts" lede={<p>What the pages are made of, as the configuration has it.</p>} />
      <div className="page-pad grid max-w-5xl gap-8 pb-16">
        <Part title="Mark">
          <Mark className="size-16" />
        </Part>
        <Part title="Colours">
          {Object.entries(colours).map(([name, tokens]) => (
            <div key={name}>
              <h3 className="font-bold">{name}</h3>
              <ul className="mt-1 flex flex-wrap gap-3 text-small">
                {tokens.map((token) => (
                  <li key={token} className="grid w-20 gap-1">
                    <span className="h-10 border border-hair" style={{ background: `var(--${token})` }} />
                    {token}
                  </li>
                ))}
              </ul>
            </div>
          ))}
        </Part>
        <Part title="Type">
          {sizes.map(([size, words]) => (
            <p key={size} className={size}>
              {words} <span className="text-small text-ink2">{size}</span>
            </p>
          ))}
        </Part>
        <Part title="Risk">
          <RiskKey />
        </Part>
        <Part title="Buttons">
          <div className="flex flex-wrap items-center gap-4">
            <Button>Save census</Button>
            <Button look="second">Acknowledge</Button>
            <Button look="quiet">Cancel</Button>
            <Button busy busyText="Saving…">
              Save census
            </Button>
            <Button disabled>Nothing to save</Button>
            <Button look="second" onClick={() => setOpen(true)}>
              Open a dialog
            </Button>
          </div>
          <Dialog title="A dialog" open={open} onClose={() => setOpen(false)}>
            <p>It holds the focus, and Escape closes it.</p>
          </Dialog>
        </Part>
        <Part title="Fields">
          <div className="grid max-w-md gap-4">
            <TextField label="Blocked bed spaces" hint="A whole number" inputMode="numeric" defaultValue="2" />
            <TextField label="Reason" error="This looks like a telephone number. Leave it out." defaultValue="…" />
            <SelectField label="Until" options={[{ value: 'shift', label: 'End of this shift' }]} />
          </div>
        </Part>
        <Part title="Notices and waiting">
          <Notice title="Saved.">The outlook was computed anew.</Notice>
          <Notice kind="caution" title="Census 3 h old.">
            Enter a new one before you act.
          </Notice>
          <Skeleton className="h-10 w-2/3" label="Loading" />
        </Part>
        <Part title="A drawing that is read, and saved">
          <div ref={drawing} className="w-max max-w-full overflow-x-auto">
            <ReadNeed label="Need by hour, an example" columns={need} names={hours} columnWidth={40}>
              <NeedStrip
                id="parts-need"
                columns={need}
                staffed={[{ at: 0, beds: 20 }]}
                columnWidth={40}
                height={104}
                tall
                counted
              />
            </ReadNeed>
          </div>
          <PictureTools of={drawing} title="Need by hour, an example" />
        </Part>
        <Part title="Results told in passing">
          <div className="flex flex-wrap gap-4">
            <Button look="second" onClick={() => announce('The exception was added.')}>
              Tell a result
            </Button>
            <Button
              look="second"
              onClick={() => announce('The day was taken out.', () => announce('It was put back.'))}
            >
              One that can be undone
            </Button>
          </div>
        </Part>
        <Part title="Table">
          <DataTable
            caption="Four hundred rows, those in view in the page"
            rows={example}
            rowKey={({ id }) => String(id)}
            file={{ fileName: 'parts.csv', head: ['An example'] }}
            columns={[
              { key: 'area', header: 'Area', rowHeader: true, cell: ({ area }) => area, value: ({ area }) => area },
              { key: 'beds', header: 'Beds', figure: true, cell: ({ beds }) => beds, value: ({ beds }) => beds },
            ]}
          />
        </Part>
      </div>
    </>
  );
}
