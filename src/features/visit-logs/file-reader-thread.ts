import { ApiError } from '../../lib/api-error.ts';
import type { CheckSettings, FileCheck } from './check-file.ts';
import type { FileSurvey } from './survey-file.ts';
import type { FileReply, FileRequest } from './visit-file.worker.ts';

/** Looks through a file on a thread of its own; aborting ends the thread at once. */
export function surveyOnThread(
  file: Blob,
  known: string[],
  now: number,
  signal: AbortSignal,
  onBytes: (bytes: number) => void,
): Promise<FileSurvey> {
  return ask({ kind: 'survey', file, known, now }, signal, onBytes, (reply) =>
    reply.kind === 'surveyed' ? reply.survey : null,
  );
}

/** Checks a file on a thread of its own; aborting ends the thread at once. */
export function checkOnThread(
  file: Blob,
  settings: CheckSettings,
  signal: AbortSignal,
  onBytes: (bytes: number) => void,
): Promise<FileCheck> {
  return ask({ kind: 'check', file, settings }, signal, onBytes, (reply) =>
    reply.kind === 'checked' ? reply.check : null,
  );
}

function ask<T>(
  request: FileRequest,
  signal: AbortSignal,
  onBytes: (bytes: number) => void,
  pick: (reply: FileReply) => T | null,
): Promise<T> {
  const worker = new Worker(new URL('./visit-file.worker.ts', import.meta.url), { type: 'module' });
  const answer = new Promise<T>((resolve, reject) => {
    signal.addEventListener('abort', () => {
      reject(signal.reason instanceof Error ? signal.reason : new Error('cancelled'));
    });
    worker.addEventListener('message', ({ data }: MessageEvent<FileReply>) => {
      if (data.kind === 'progress') onBytes(data.bytes);
      else if (data.kind === 'failed') reject(asProblem(data.message, data.own));
      else {
        const picked = pick(data);
        if (picked !== null) resolve(picked);
      }
    });
    worker.addEventListener('error', (event) => {
      reject(asProblem(event.message || 'The thread that reads the file did not start.', false));
    });
    signal.throwIfAborted();
    worker.postMessage(request);
  });
  return answer.finally(() => {
    worker.terminate();
  });
}

function asProblem(message: string, own: boolean): ApiError {
  return new ApiError({
    type: 'about:blank',
    status: 0,
    title: own ? 'This file cannot be read' : 'Reading the file went wrong',
    detail: message,
    kept: 'Nothing was sent.',
    next: own ? 'Choose the file again once it is mended.' : 'Reload the page and try again.',
  });
}
