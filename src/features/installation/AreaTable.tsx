import { useState } from 'react';
import type { InstallationSite } from '../../../shared/api/installation.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { Dialog } from '../../components/Dialog.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { AreaFields } from './AreaFields.tsx';
import { AreaOrder } from './AreaOrder.tsx';
import { draftOfArea, emptyArea, readAreas, type AreaDraft } from './area-draft.ts';
import { useRemoveArea, useSaveArea } from './queries.ts';

/** A site's care areas, where each can be changed, and one added or removed. */
export function AreaTable({ site }: { site: InstallationSite }) {
  const save = useSaveArea(site.id);
  const remove = useRemoveArea(site.id);
  const [asked, setAsked] = useState<{ areaId: string | null; draft: AreaDraft } | null>(null);
  const [tried, setTried] = useState(false);
  const [ordering, setOrdering] = useState(false);
  const close = () => {
    setAsked(null);
    setTried(false);
    save.reset();
    remove.reset();
  };
  const others = site.areas.filter(({ id }) => id !== asked?.areaId).map(draftOfArea);
  // The one in question stands last, so that a name that is taken is its own fault.
  const read = readAreas([...others, ...(asked ? [asked.draft] : [])]);
  const faults = read.faults[others.length] ?? {};
  return (
    <>
      <DataTable
        caption="Care areas"
        captionHidden
        rows={site.areas}
        rowKey={({ id }) => id}
        file={false}
        columns={[
          { key: 'name', header: 'Area', rowHeader: true, cell: ({ name }) => name },
          { key: 'kind', header: 'A space is a', cell: ({ spaceKind }) => spaceKind },
          { key: 'spaces', header: 'Spaces that exist', figure: true, cell: ({ spaces }) => spaces },
          { key: 'minimum', header: 'Safe minimum', figure: true, cell: ({ safeMinimum }) => safeMinimum },
          { key: 'step', header: 'Step', figure: true, cell: ({ bedStep }) => bedStep },
          { key: 'notice', header: 'Notice', figure: true, cell: ({ noticeHours }) => `${String(noticeHours)} h` },
          {
            key: 'change',
            header: <span className="sr-only">Change</span>,
            cell: (area) => (
              <Button
                look="quiet"
                aria-label={`Change ${area.name}`}
                onClick={() => setAsked({ areaId: area.id, draft: draftOfArea(area) })}
              >
                Change
              </Button>
            ),
          },
        ]}
      />
      <div className="flex flex-wrap gap-4">
        <Button look="second" onClick={() => setAsked({ areaId: null, draft: emptyArea })}>
          Add a care area
        </Button>
        {site.areas.length > 1 ? (
          <Button look="second" onClick={() => setOrdering(true)}>
            Change the order
          </Button>
        ) : null}
      </div>
      <AreaOrder site={site} open={ordering} onClose={() => setOrdering(false)} />
      <Dialog
        title={asked?.areaId ? `Change ${asked.draft.name || 'the area'}` : 'Add a care area'}
        open={asked !== null}
        onClose={close}
      >
        {asked ? (
          <form
            className="grid gap-4"
            onSubmit={(event) => {
              event.preventDefault();
              setTried(true);
              if (Object.keys(faults).length > 0) return;
              save.mutate({ areaId: asked.areaId, body: read.bodies[others.length] }, { onSuccess: close });
            }}
          >
            <p className="text-ink2">
              Nothing is ever planned or suggested below the safe minimum.{' '}
              {asked.areaId === null
                ? 'Once the site has a plan, its operations manager must add the new area to it, and the next arrival model learns it: until then Tonight says what is missing.'
                : 'The figures act at once.'}
            </p>
            <AreaFields
              draft={asked.draft}
              faults={tried ? faults : {}}
              onDraft={(draft) => setAsked({ ...asked, draft })}
            />
            {save.error ? <ProblemNotice error={save.error} /> : null}
            {remove.error ? <ProblemNotice error={remove.error} /> : null}
            <div className="flex flex-wrap gap-4">
              <Button type="submit" busy={save.isPending} busyText="Saving…">
                Save
              </Button>
              {asked.areaId !== null && !site.hasData ? (
                <Button
                  look="second"
                  busy={remove.isPending}
                  busyText="Removing…"
                  onClick={() => {
                    if (asked.areaId !== null) remove.mutate(asked.areaId, { onSuccess: close });
                  }}
                >
                  Remove the area
                </Button>
              ) : null}
            </div>
          </form>
        ) : null}
      </Dialog>
    </>
  );
}
