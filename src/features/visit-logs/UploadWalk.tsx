import { useEffect, useRef, useState } from 'react';
import type { ReactNode } from 'react';
import type { VisitLogSummary } from '../../../shared/api/visit-logs.ts';
import { periodOf } from '../../../shared/domain/log-period.ts';
import { problemRowsCsv } from '../../../shared/domain/problem-rows.ts';
import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { PageHead } from '../../components/PageHead.tsx';
import { formatCount, formatNumber } from '../../lib/format.ts';
import { AcceptForm, offerAnswers } from './AcceptForm.tsx';
import { AcceptCounts, noCountAnswers } from './AcceptCounts.tsx';
import { CheckReport } from './CheckReport.tsx';
import { ChooseFile } from './ChooseFile.tsx';
import { CountReport } from './CountReport.tsx';
import { MapStep } from './MapStep.tsx';
import type { AreaName } from './mapping.ts';
import { Progress } from './Progress.tsx';
import type { LastMapping } from './remember-mapping.ts';
import { saveFile } from '../../lib/save-file.ts';
import { StudyReport } from './StudyReport.tsx';
import { useUploadWalk, type Walk } from './use-upload-walk.ts';

/** The walk from a file to a loaded log: choose, map, check, accept. */
export function UploadWalk({
  siteId,
  areas,
  timeZone,
  now,
  last,
  shiftEnds,
  logs,
  aside,
  guideHref,
  onAccepted,
}: {
  siteId: string;
  areas: readonly AreaName[];
  timeZone: string;
  now: number;
  /** How the site's last file was read, by whom and when; null before the first. */
  last: LastMapping | null;
  /** Ends of the site's shifts, minutes of the local day. */
  shiftEnds: readonly number[];
  logs: readonly VisitLogSummary[];
  aside: ReactNode;
  /** The page that tells of columns and formats. */
  guideHref: string;
  onAccepted: (logId: string) => void;
}) {
  const { walk, error, ...act } = useUploadWalk({
    siteId,
    areas,
    timeZone,
    now,
    remembered: last?.mapping ?? null,
    shiftEnds,
    covered: logs.flatMap(({ counts }) => counts),
    onAccepted,
  });
  const remembered = last?.mapping ?? null;
  const [answers, setAnswers] = useState(() => offerAnswers(remembered));
  const [countAnswers, setCountAnswers] = useState(noCountAnswers);
  const bodyRef = useRef<HTMLDivElement>(null);
  const lastStep = useRef(walk.step);
  useEffect(() => {
    // A new step is read from its start; the page's first one leaves the focus alone.
    if (lastStep.current === walk.step) return;
    lastStep.current = walk.step;
    bodyRef.current?.focus({ preventScroll: true });
    window.scrollTo?.({ top: 0 });
  }, [walk.step]);

  /** What is left out is asked again after a new check; the other answers stay. */
  const recheck: typeof act.check = (read, mapping) => {
    setAnswers((before) => ({ ...before, goodOnly: false }));
    act.check(read, mapping);
  };
  const studyReport = ({ study, report, counted }: Extract<Walk, { step: 'report' }>) => {
    const period = counted
      ? { from: report.firstArrivalAt ?? 0, to: report.lastTimeAt ?? 0 }
      : periodOf(report, timeZone, now);
    if (!study || !period) return null;
    const arrivals = report.visitsByArea.reduce((sum, { visits }) => sum + visits, 0);
    const kind = counted ? 'hourly counts' : 'visits';
    return <StudyReport {...{ study, period, areas, timeZone, logs, kind }} goodRows={arrivals} />;
  };
  return (
    <>
      <PageHead
        tab="Load a visit log"
        title={titleOf(walk)}
        lede={<p className="max-w-[58rem]">{ledeOf(walk, last !== null)}</p>}
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
      <div ref={bodyRef} tabIndex={-1} className="page-pad grid grid-cols-[minmax(0,1fr)] gap-8 pt-2 outline-none">
        {error ? <ProblemNotice error={error} /> : null}
        {walk.step === 'choose' ? (
          <ChooseFile
            guideHref={guideHref}
            onChoose={(file) => {
              setAnswers(offerAnswers(remembered));
              setCountAnswers(noCountAnswers);
              act.choose(file);
            }}
          />
        ) : null}
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
        {walk.step === 'map' ? (
          <MapStep walk={walk} areas={areas} last={last} timeZone={timeZone} act={{ ...act, check: recheck }} />
        ) : null}
        {walk.step === 'report' ? (
          <>
            {walk.counted ? (
              <CountReport
                counted={walk.counted}
                rows={walk.report.goodRows}
                areas={areas}
                payloadBytes={walk.payload?.size ?? 0}
                study={studyReport(walk)}
              />
            ) : (
              <CheckReport
                report={walk.report}
                mapping={walk.mapping}
                areas={areas}
                timeZone={timeZone}
                payloadBytes={walk.payload?.size ?? 0}
                study={studyReport(walk)}
                onSaveRows={(chosen) => {
                  const rows = walk.problemRows.filter(
                    ({ problem, column }) => !chosen || (problem === chosen.problem && column === chosen.column),
                  );
                  saveFile('problem-rows.csv', 'text/csv', problemRowsCsv(rows));
                }}
                onRepeatedHour={(repeatedHour) => {
                  recheck(walk, { ...walk.mapping, repeatedHour });
                }}
              />
            )}
            {walk.payload && walk.counted ? (
              <AcceptCounts
                counted={walk.counted}
                areas={areas}
                end={walk.report.lastTimeAt ?? 0}
                rows={walk.report.goodRows}
                timeZone={timeZone}
                now={now}
                answers={countAnswers}
                onAnswer={(changed) => {
                  setCountAnswers((before) => ({ ...before, ...changed }));
                }}
                onAccept={(facts, stated) => {
                  act.send(walk, facts, false, stated);
                }}
              />
            ) : walk.payload ? (
              <AcceptForm
                report={walk.report}
                timeZone={timeZone}
                now={now}
                fileDate={Math.floor(walk.file.lastModified / 1000)}
                remembered={remembered}
                answers={answers}
                onAnswer={(changed) => {
                  setAnswers((before) => ({ ...before, ...changed }));
                }}
                onAccept={(facts, wasAskedMissing) => {
                  act.send(walk, facts, wasAskedMissing);
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
      return `Sending ${walk.counted ? formatCount(walk.report.goodRows, 'hour') : formatCount(walk.report.goodRows, 'visit')}.`;
  }
}

function ledeOf(walk: Walk, hasLast: boolean): string {
  switch (walk.step) {
    case 'choose':
      return 'Choose the file, map its columns, look at the check, then accept it. Nothing is sent before that.';
    case 'surveying':
    case 'checking':
      return 'Nothing is sent.';
    case 'map':
      return hasLast
        ? 'Correct what is wrong; what is not mapped is dropped.'
        : 'The columns are guessed from their names and values. Correct what is wrong; what is not mapped is dropped.';
    case 'report':
      return walk.report.goodRows === 0
        ? 'No row can be loaded. Look at the kinds of problem below: often a column is mapped wrongly.'
        : 'Nothing is sent yet. Look at what was found, answer the questions, then load it.';
    case 'sending':
      return 'All of it is loaded, or nothing.';
  }
}
