import { useEffect, useRef } from 'react';
import type { ReactNode } from 'react';
import { Button } from '../../components/Button.tsx';
import { Notice, ProblemNotice } from '../../components/Notice.tsx';
import { PageHead } from '../../components/PageHead.tsx';
import { formatCount, formatNumber } from '../../lib/format.ts';
import { AcceptForm } from './AcceptForm.tsx';
import { CheckReport } from './CheckReport.tsx';
import { ChooseFile } from './ChooseFile.tsx';
import { DateOrderQuestion } from './DateOrderQuestion.tsx';
import { MapColumns } from './MapColumns.tsx';
import { MapValues } from './MapValues.tsx';
import { ambiguousColumns, mappingFaults, remap, stateOrder, type AreaName } from './mapping.ts';
import { Progress } from './Progress.tsx';
import { useUploadWalk, type Walk } from './use-upload-walk.ts';

/** The walk from a file to a loaded log: choose, map, check, accept. */
export function UploadWalk({
  siteId,
  areas,
  timeZone,
  now,
  aside,
  onAccepted,
}: {
  siteId: string;
  areas: readonly AreaName[];
  timeZone: string;
  now: number;
  aside: ReactNode;
  onAccepted: (logId: string) => void;
}) {
  const { walk, error, ...act } = useUploadWalk({ siteId, areas, timeZone, now, onAccepted });
  const bodyRef = useRef<HTMLDivElement>(null);
  const lastStep = useRef(walk.step);
  useEffect(() => {
    // A new step is read from its start; the page's first one leaves the focus alone.
    if (lastStep.current === walk.step) return;
    lastStep.current = walk.step;
    bodyRef.current?.focus({ preventScroll: true });
    window.scrollTo?.({ top: 0 });
  }, [walk.step]);

  return (
    <>
      <PageHead
        tab="Load a visit log"
        title={titleOf(walk)}
        lede={<p className="max-w-[58rem]">{ledeOf(walk)}</p>}
        aside={
          <div className="grid gap-0.5">
            <div>
              Step <b className="text-ink">{stepNumber[walk.step]} of 4</b>
            </div>
            {'file' in walk ? <div className="max-w-72 break-words">{walk.file.name}</div> : null}
            {aside}
          </div>
        }
      />
      <div ref={bodyRef} tabIndex={-1} className="page-pad grid gap-8 pt-2 outline-none">
        {error ? <ProblemNotice error={error} /> : null}
        {walk.step === 'choose' ? <ChooseFile onChoose={act.choose} /> : null}
        {walk.step === 'surveying' ? (
          <Progress title="Reading the file" {...walk} onCancel={act.cancel} doneText="Looking at what was read" />
        ) : null}
        {walk.step === 'checking' ? (
          <Progress title="Checking every row" {...walk} onCancel={act.cancel} doneText="Putting the report together" />
        ) : null}
        {walk.step === 'sending' ? (
          <Progress
            title="Sending the visits"
            {...walk}
            onCancel={act.cancel}
            doneText="Sent; the server is checking every row again"
          />
        ) : null}
        {walk.step === 'map' ? <MapStep walk={walk} areas={areas} act={act} /> : null}
        {walk.step === 'report' ? (
          <>
            <CheckReport
              report={walk.report}
              mapping={walk.mapping}
              areas={areas}
              timeZone={timeZone}
              payloadBytes={walk.payload?.size ?? 0}
              onRepeatedHour={(repeatedHour) => {
                act.check(walk, { ...walk.mapping, repeatedHour });
              }}
            />
            {walk.payload ? (
              <AcceptForm
                report={walk.report}
                timeZone={timeZone}
                now={now}
                fileDate={Math.floor(walk.file.lastModified / 1000)}
                onAccept={(facts) => {
                  act.send(walk, facts);
                }}
              />
            ) : null}
            <Button look="quiet" className="justify-self-start" onClick={act.back}>
              Back to the columns
            </Button>
          </>
        ) : null}
      </div>
    </>
  );
}

function MapStep({
  walk,
  areas,
  act,
}: {
  walk: Extract<Walk, { step: 'map' }>;
  areas: readonly AreaName[];
  act: Pick<ReturnType<typeof useUploadWalk>, 'setMapping' | 'check' | 'back'>;
}) {
  const { survey, mapping, refused } = walk;
  const faults = mappingFaults(survey, mapping);
  const asksOrder = ambiguousColumns(survey, mapping).length > 0;
  const unanswered = asksOrder && mapping.statedOrder === null;
  return (
    <>
      {refused.length > 0 ? (
        <Notice kind="caution" live title="The file cannot be taken as it is. Nothing was sent.">
          <ul className="mt-1 list-disc pl-5">
            {refused.map((fault) => (
              <li key={`${fault.at} ${fault.message}`}>
                <b className="text-ink">{fault.at}: </b>
                {fault.message}
              </li>
            ))}
          </ul>
        </Notice>
      ) : null}
      <MapColumns
        survey={survey}
        mapping={mapping}
        onMap={(ours, index) => {
          act.setMapping(remap(survey, mapping, ours, index, areas));
        }}
      />
      {asksOrder ? (
        <DateOrderQuestion
          order={mapping.statedOrder}
          onState={(order) => {
            act.setMapping(stateOrder(survey, mapping, order));
          }}
        />
      ) : null}
      <MapValues survey={survey} mapping={mapping} areas={areas} onChange={act.setMapping} />
      {faults.length > 0 ? (
        <Notice kind="caution" title="Before the rows can be checked">
          <ul className="mt-1 list-disc pl-5">
            {faults.map((fault) => (
              <li key={fault}>{fault}</li>
            ))}
          </ul>
        </Notice>
      ) : null}
      <div className="flex flex-wrap items-center gap-6">
        <Button
          disabled={faults.length > 0 || unanswered}
          onClick={() => {
            act.check(walk, mapping);
          }}
        >
          Check {formatCount(survey.rows, 'row')}
        </Button>
        <Button look="quiet" onClick={act.back}>
          Choose another file
        </Button>
        {unanswered ? <span className="text-ink2">First say which comes first, day or month.</span> : null}
      </div>
    </>
  );
}

const stepNumber: Record<Walk['step'], number> = {
  choose: 1,
  surveying: 1,
  map: 2,
  checking: 3,
  report: 3,
  sending: 4,
};

function titleOf(walk: Walk): string {
  switch (walk.step) {
    case 'choose':
      return 'Load a visit log.';
    case 'surveying':
      return 'Reading the file on this computer.';
    case 'map':
      return `${formatCount(walk.survey.rows, 'row')}: say what each column holds.`;
    case 'checking':
      return 'Checking every row on this computer.';
    case 'report':
      return walk.report.problemRows === 0
        ? `All ${formatCount(walk.report.rows, 'row is', 'rows are')} good.`
        : `${formatNumber(walk.report.problemRows)} of ${formatCount(walk.report.rows, 'row has', 'rows have')} a problem.`;
    case 'sending':
      return `Sending ${formatCount(walk.report.goodRows, 'visit')}.`;
  }
}

function ledeOf(walk: Walk): string {
  switch (walk.step) {
    case 'choose':
      return 'Choose the file, map its columns, look at the check, then accept it. Nothing is sent before that.';
    case 'surveying':
    case 'checking':
      return 'Nothing is sent.';
    case 'map':
      return 'The columns are guessed from their names and values. Correct what is wrong; what is not mapped is dropped.';
    case 'report':
      return walk.report.goodRows === 0
        ? 'No row can be loaded. Look at the kinds of problem below: often a column is mapped wrongly.'
        : 'Nothing is sent yet. Look at what was found, answer the questions, then load it.';
    case 'sending':
      return 'All of it is loaded, or nothing.';
  }
}
