import { useEffect, useRef, useState } from 'react';
import type { RememberedMapping } from '../../../shared/api/visit-log-mapping.ts';
import type { ExtractFactsInput, StatedStaysInput } from '../../../shared/api/visit-logs.ts';
import type { CountedFile } from '../../../shared/domain/hourly-count.ts';
import { screenFileName } from '../../../shared/domain/screen-file-name.ts';
import type { FileStudy, TimeSpan } from '../../../shared/domain/file-study.ts';
import type { ProblemRows } from '../../../shared/domain/problem-rows.ts';
import type { VisitReport } from '../../../shared/domain/visit-report.ts';
import type { FileMapping } from './check-file.ts';
import { checkOnThread, surveyOnThread } from './file-reader-thread.ts';
import { offerMapping, type AreaName } from './mapping.ts';
import { rememberedFrom } from './remember-mapping.ts';
import { useAcceptVisitLog } from './queries.ts';
import { sendFile } from './send-file.ts';
import type { FileSurvey } from './survey-file.ts';

interface Read {
  file: File;
  survey: FileSurvey;
  mapping: FileMapping;
}
interface Checked extends Read {
  report: VisitReport;
  problemRows: ProblemRows[];
  study: FileStudy | null;
  /** What a file of hourly counts holds; null for visits. */
  counted: CountedFile | null;
  payload: Blob | null;
}

/** Where the walk stands. `bytes` of `total` is how far the work under way is. */
export type Walk =
  | { step: 'choose' }
  | { step: 'surveying'; file: File; bytes: number; total: number }
  | (Read & { step: 'map'; refused: readonly { at: string; message: string }[] })
  | (Read & { step: 'checking'; bytes: number; total: number })
  | (Checked & { step: 'report' })
  | (Checked & { step: 'sending'; bytes: number; total: number });

/** The walk of one file from being chosen to being accepted, with one piece of work at a time. */
export function useUploadWalk({
  siteId,
  areas,
  timeZone,
  now,
  remembered,
  shiftEnds,
  covered,
  onAccepted,
}: {
  siteId: string;
  areas: readonly AreaName[];
  timeZone: string;
  now: number;
  /** How the site's last file was read; null before the first. */
  remembered: RememberedMapping | null;
  /** Ends of the site's shifts, minutes of the local day. */
  shiftEnds: readonly number[];
  /** What loaded logs cover already. */
  covered: readonly TimeSpan[];
  onAccepted: (logId: string) => void;
}) {
  const [walk, setWalk] = useState<Walk>({ step: 'choose' });
  const [error, setError] = useState<unknown>(null);
  const accept = useAcceptVisitLog(siteId);
  const work = useRef<AbortController | null>(null);
  useEffect(
    () => () => {
      work.current?.abort();
    },
    [],
  );

  /** Runs work that can be cancelled; if it fails or is cancelled, the walk goes back to where it came from. */
  async function run(
    from: Walk,
    during: Walk,
    task: (signal: AbortSignal, onBytes: (bytes: number) => void) => Promise<Walk | null>,
  ) {
    work.current?.abort();
    const abort = new AbortController();
    work.current = abort;
    setError(null);
    setWalk(during);
    const onBytes = (bytes: number) => {
      if (work.current === abort) setWalk((walk) => ('bytes' in walk ? { ...walk, bytes } : walk));
    };
    try {
      const next = await task(abort.signal, onBytes);
      if (next && work.current === abort) setWalk(next);
    } catch (failure) {
      if (work.current !== abort) return;
      setWalk(from);
      if (!abort.signal.aborted) setError(failure);
    }
  }

  const setMapping = (mapping: FileMapping) => {
    setWalk((walk) => (walk.step === 'map' ? { ...walk, mapping, refused: [] } : walk));
  };

  const back = () => {
    setError(null);
    setWalk((walk) =>
      'survey' in walk && walk.step !== 'map'
        ? { step: 'map', file: walk.file, survey: walk.survey, mapping: walk.mapping, refused: [] }
        : { step: 'choose' },
    );
  };

  const cancel = () => {
    work.current?.abort();
  };

  const choose = (file: File) => {
    const known = areas.flatMap(({ id, name }) => [id, name]);
    void run({ step: 'choose' }, { step: 'surveying', file, bytes: 0, total: file.size }, async (signal, onBytes) => {
      const survey = await surveyOnThread(file, known, now, signal, onBytes);
      return { step: 'map', file, survey, mapping: offerMapping(survey, areas, remembered), refused: [] };
    });
  };

  const check = ({ file, survey }: Read, mapping: FileMapping) => {
    const from: Walk = { step: 'map', file, survey, mapping, refused: [] };
    const settings = {
      survey,
      mapping,
      areaIds: areas.map(({ id }) => id),
      areaNames: areas.map(({ name }) => name),
      timeZone,
      shiftEnds,
      covered,
      now,
    };
    void run(from, { ...from, step: 'checking', bytes: 0, total: file.size }, async (signal, onBytes) => {
      const { outcome, payload } = await checkOnThread(file, settings, signal, onBytes);
      return outcome.refused === null
        ? {
            step: 'report',
            file,
            survey,
            mapping,
            report: outcome.report,
            problemRows: outcome.problemRows,
            study: outcome.study,
            counted: outcome.counted,
            payload,
          }
        : { ...from, refused: outcome.refused };
    });
  };

  const send = (
    checked: Checked,
    facts: ExtractFactsInput,
    wasAskedMissing: boolean,
    statedStays?: StatedStaysInput,
  ) => {
    const { payload, report } = checked;
    if (payload === null) return;
    const from: Walk = { ...checked, step: 'report' };
    void run(from, { ...checked, step: 'sending', bytes: 0, total: payload.size }, async (signal, onBytes) => {
      const received = await sendFile(siteId, screenFileName(checked.file.name, now), payload, signal, onBytes);
      const leftOut = new Map<string, number>();
      for (const { problem, rows } of report.problems) leftOut.set(problem, (leftOut.get(problem) ?? 0) + rows);
      const { logId } = await accept.mutateAsync({
        checkId: received.checkId,
        // The person agreed to leave out what the check here found; anything more that the server finds refuses the file.
        goodRowsOnly: false,
        facts,
        leftOutBeforeSending: {
          rows: report.problemRows,
          kinds: [...leftOut].map(([problem, rows]) => ({ problem, rows })),
        },
        // How visits were read stays remembered while counts are loaded.
        ...(checked.counted
          ? { statedStays }
          : { mapping: rememberedFrom(checked.survey, checked.mapping, facts, wasAskedMissing) }),
      });
      onAccepted(logId);
      return null;
    });
  };

  return { walk, error, setMapping, back, cancel, choose, check, send };
}
