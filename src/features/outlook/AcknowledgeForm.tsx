import { useRef, useState } from 'react';
import { acknowledgeBody } from '../../../shared/api/acknowledgements.ts';
import { Button } from '../../components/Button.tsx';
import { TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { useAcknowledge } from './queries.ts';
import { screenTypedNote } from './screen-typed-note.ts';

/** Why a note cannot be sent; null if it can. The server checks the same again. */
export async function checkNote(note: string): Promise<string | null> {
  const parsed = acknowledgeBody.shape.note.safeParse(note);
  if (!parsed.success) return parsed.error.issues[0]?.message ?? 'Check this note';
  return screenTypedNote(parsed.data);
}

/** The note field's element, so that the action bar finds it. */
export const noteFieldId = (areaId: string) => `acknowledge-${areaId}`;

/** What was done, and the press that says that the risk was seen. A note that could not be saved stays in its field. */
export function AcknowledgeForm({
  areaId,
  outlookId,
  siteId,
  note,
  onNote,
  onDone,
}: {
  areaId: string;
  outlookId: string;
  siteId: string;
  /** Kept above the panel, so that it outlives an hour in which the area is under its limit. */
  note: string;
  onNote: (note: string) => void;
  onDone?: () => void;
}) {
  const acknowledging = useAcknowledge(siteId);
  const [fault, setFault] = useState<string | null>(null);

  const checking = useRef(false);

  async function save() {
    if (acknowledging.isPending || checking.current) return;
    checking.current = true;
    const found = await checkNote(note);
    checking.current = false;
    setFault(found);
    if (found) return;
    acknowledging.mutate(
      { areaId, outlookId, note },
      {
        onSuccess: () => {
          onNote('');
          onDone?.();
        },
      },
    );
  }

  return (
    <form
      id={noteFieldId(areaId)}
      noValidate
      className="mt-2 grid gap-2 print:hidden"
      onSubmit={(event) => {
        event.preventDefault();
        void save();
      }}
    >
      <div className="flex flex-wrap items-end gap-3">
        <div className="min-w-0 flex-[1_1_15rem]">
          <TextField
            label="What was done, no patient details"
            maxLength={500}
            value={note}
            error={fault ?? undefined}
            className="bg-water"
            onChange={(event) => {
              onNote(event.target.value);
              setFault(null);
            }}
          />
        </div>
        <Button type="submit" busy={acknowledging.isPending} busyText="Saving…" className="max-sm:w-full">
          Acknowledge
        </Button>
      </div>
      {acknowledging.error ? <ProblemNotice error={acknowledging.error} /> : null}
    </form>
  );
}
