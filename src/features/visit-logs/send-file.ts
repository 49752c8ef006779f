import { checkVisitLog, visitLogCheck, type VisitLogCheck } from '../../../shared/api/visit-logs.ts';
import { addressOf, readProblem, writingHeaders } from '../../lib/api-client.ts';
import { ApiError } from '../../lib/api-error.ts';

/**
 * Sends the packed visits and waits for the server's check. Not through `call`: only XMLHttpRequest tells
 * how much of a body has gone out.
 */
export function sendFile(
  siteId: string,
  fileName: string,
  payload: Blob,
  signal: AbortSignal,
  onBytes: (bytes: number) => void,
): Promise<VisitLogCheck> {
  return new Promise((resolve, reject) => {
    const request = new XMLHttpRequest();
    request.open('POST', addressOf(checkVisitLog.path, { siteId }, { fileName }));
    request.setRequestHeader('accept', 'application/json');
    request.setRequestHeader('content-type', 'application/gzip');
    for (const [name, value] of Object.entries(writingHeaders())) request.setRequestHeader(name, value);
    request.upload.addEventListener('progress', (event) => {
      onBytes(event.loaded);
    });
    request.addEventListener('load', () => {
      const text = request.responseText;
      if (request.status !== 201) {
        void readProblem(new Response(text === '' ? null : text, { status: request.status })).then(reject);
        return;
      }
      const parsed = visitLogCheck.safeParse(readJson(text));
      if (parsed.success) resolve(parsed.data);
      else reject(lost('The answer was not understood', 'Reload the page and try again.'));
    });
    request.addEventListener('error', () => {
      reject(lost('The server cannot be reached', 'Check the connection, then send again.'));
    });
    request.addEventListener('abort', () => {
      reject(signal.reason instanceof Error ? signal.reason : new Error('cancelled'));
    });
    signal.addEventListener('abort', () => {
      request.abort();
    });
    signal.throwIfAborted();
    request.send(payload);
  });
}

function readJson(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch {
    return null;
  }
}

function lost(title: string, next: string): ApiError {
  return new ApiError({
    type: 'about:blank',
    status: 0,
    title,
    detail: 'The server deletes an upload that does not arrive whole.',
    kept: 'Nothing was stored; the checked file is still here.',
    next,
  });
}
