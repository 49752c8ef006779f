import { checkFile, type CheckSettings, type FileCheck } from './check-file.ts';
import { UnreadableFileError } from './unreadable-file.ts';
import { surveyFile, type FileSurvey } from './survey-file.ts';

/** What the page asks of the thread. */
export type FileRequest =
  { kind: 'survey'; file: Blob; known: string[]; now: number } | { kind: 'check'; file: Blob; settings: CheckSettings };

/** What the thread answers: how far it is, then one end. */
export type FileReply =
  | { kind: 'progress'; bytes: number }
  | { kind: 'surveyed'; survey: FileSurvey }
  | { kind: 'checked'; check: FileCheck }
  /** `own`: a message made for the person; otherwise a fault of ours. */
  | { kind: 'failed'; message: string; own: boolean };

const reply = (message: FileReply) => {
  postMessage(message);
};

const progressEvery = 100;

async function work(request: FileRequest): Promise<void> {
  let bytes = 0;
  let told = 0;
  const onBytes = (more: number) => {
    bytes += more;
    const now = performance.now();
    if (now - told < progressEvery) return;
    told = now;
    reply({ kind: 'progress', bytes });
  };
  try {
    if (request.kind === 'survey') {
      reply({ kind: 'surveyed', survey: await surveyFile(request.file, new Set(request.known), request.now, onBytes) });
    } else {
      reply({ kind: 'checked', check: await checkFile(request.file, request.settings, onBytes) });
    }
  } catch (error) {
    const own = error instanceof UnreadableFileError;
    reply({ kind: 'failed', message: error instanceof Error ? error.message : String(error), own });
  }
}

addEventListener('message', (event: MessageEvent<FileRequest>) => {
  void work(event.data);
});
