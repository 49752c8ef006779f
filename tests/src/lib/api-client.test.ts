import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { z } from 'zod';
import { enterCensus } from '../../../shared/api/censuses.ts';
import { defineContract } from '../../../shared/api/contract.ts';
import { getSite } from '../../../shared/api/sites.ts';
import { addressOf, call, onSignedOut, rememberCsrfToken } from '../../../src/lib/api-client.ts';
import { ApiError } from '../../../src/lib/api-error.ts';

const fetched = vi.fn<typeof fetch>();
beforeEach(() => vi.stubGlobal('fetch', fetched));
afterEach(() => {
  vi.unstubAllGlobals();
  fetched.mockReset();
});

const json = (body: unknown, status = 200) => new Response(JSON.stringify(body), { status });
const body = {
  takenAt: 1_796_000_000,
  areas: [{ areaId: 'acute', present: 5, waiting: 1, boarding: 1 }],
  undecidedWaiting: null,
  ambulancesHolding: null,
  arrivalsSinceMidnight: null,
};
const save = () =>
  call(enterCensus, { params: { siteId: 'general' }, body, kept: 'Your figures are still in the fields.' });

async function failure(promise: Promise<unknown>): Promise<ApiError> {
  const error: unknown = await promise.then(
    () => null,
    (reason: unknown) => reason,
  );
  if (!(error instanceof ApiError)) throw new Error('expected an ApiError');
  return error;
}

describe('addressOf', () => {
  it('fills parameters in, encoded, and leaves absent filters out', () => {
    expect(
      addressOf(
        '/api/sites/:siteId/logs/:logId',
        { siteId: 'a b', logId: 'x/y' },
        { page: 2, kind: undefined, open: true },
      ),
    ).toBe('/api/sites/a%20b/logs/x%2Fy?page=2&open=true');
  });
  it('names a parameter that is missing', () => {
    expect(() => addressOf('/api/sites/:siteId', {})).toThrow(new RangeError('/api/sites/:siteId needs siteId'));
  });
});

describe('call', () => {
  it('says what was kept when a failing server says nothing', async () => {
    fetched.mockResolvedValue(new Response('<html>bad gateway</html>', { status: 502 }));
    const error = await failure(save());
    expect(error.title).toBe('The server could not answer');
    expect(error.kept).toBe('Your figures are still in the fields.');
    expect(error.next).toContain('Try again');
  });

  it('leaves the server’s own words on what was kept', async () => {
    fetched.mockResolvedValue(
      json({ type: 'about:blank', title: 'Conflict', status: 409, detail: 'No.', kept: 'Nothing changed.' }, 409),
    );
    expect((await failure(save())).kept).toBe('Nothing changed.');
  });

  it('sends what the contract says, with the anti-forgery token on writing only, and parses the reply', async () => {
    rememberCsrfToken('token-1');
    fetched.mockResolvedValue(json({ censusId: 'c1', outlookId: 'o1', reason: null }, 201));
    await expect(save()).resolves.toEqual({ censusId: 'c1', outlookId: 'o1', reason: null });
    const [address, request] = fetched.mock.calls[0];
    expect(address).toBe('/api/sites/general/censuses');
    expect(request?.method).toBe('POST');
    expect(new Headers(request?.headers).get('x-csrf-token')).toBe('token-1');
    expect(new Headers(request?.headers).get('content-type')).toBe('application/json');
    expect(JSON.parse(request?.body as string)).toEqual(body);

    fetched.mockResolvedValue(json({}, 404));
    await failure(call(getSite, { params: { siteId: 'general' } }));
    expect(new Headers(fetched.mock.calls[1][1]?.headers).has('x-csrf-token')).toBe(false);
  });

  it('carries the whole problem document: title, detail, what was kept, what next, every fault', async () => {
    fetched.mockResolvedValue(
      json(
        {
          type: 'about:blank',
          title: 'The census was not saved',
          status: 422,
          detail: 'Two figures do not fit.',
          kept: 'The census of 18:40 stands.',
          next: 'Mend them and save again.',
          requestId: 'r-7',
          faults: [
            { at: 'areas.0.waiting', message: 'Not below 0' },
            { at: 'takenAt', message: 'Not in the future' },
          ],
        },
        422,
      ),
    );
    const error = await failure(save());
    expect(error).toMatchObject({
      status: 422,
      title: 'The census was not saved',
      detail: 'Two figures do not fit.',
      kept: 'The census of 18:40 stands.',
      next: 'Mend them and save again.',
      requestId: 'r-7',
    });
    expect(error.faults).toHaveLength(2);
    expect(error.faultAt('takenAt')).toBe('Not in the future');
    expect(error.faultAt('areas')).toBeUndefined();
  });

  it('says in its own words what a server refused without a problem document', async () => {
    fetched.mockResolvedValue(new Response('<html>Bad gateway</html>', { status: 502 }));
    const error = await failure(save());
    expect(error.title).toBe('The server could not answer');
    expect(error.detail).toContain('502');
    expect(error.next).toContain('Try again');
  });

  it('says what was kept when the server is not reached', async () => {
    fetched.mockRejectedValue(new TypeError('Failed to fetch'));
    const error = await failure(save());
    expect(error.status).toBe(0);
    expect(error.title).toBe('The server cannot be reached');
    expect(error.kept).toBe('Your figures are still in the fields.');
    const reading = await failure(call(getSite, { params: { siteId: 'general' } }));
    expect(reading.kept).toBe('What you see is what was loaded last.');
  });

  it('tells the page that nobody is signed in', async () => {
    const signedOut = vi.fn();
    const stop = onSignedOut(signedOut);
    fetched.mockImplementation(() =>
      Promise.resolve(json({ type: 'about:blank', title: 'Signed out', status: 401, detail: 'Sign in.' }, 401)),
    );
    await failure(save());
    expect(signedOut).toHaveBeenCalledTimes(1);
    stop();
    await failure(save());
    expect(signedOut).toHaveBeenCalledTimes(1);
  });

  it('refuses a reply that does not fit the contract, and one that is not JSON', async () => {
    fetched.mockResolvedValueOnce(json({ censusId: 5 }, 201));
    expect((await failure(save())).title).toBe('The answer was not understood');
    fetched.mockResolvedValueOnce(new Response('<p>hello</p>', { status: 200 }));
    expect((await failure(save())).title).toBe('The answer was not understood');
  });

  it('reads an empty reply as null', async () => {
    const erase = defineContract({
      id: 'erase',
      method: 'delete',
      path: '/api/thing',
      access: 'signed-in',
      summary: 'Erase.',
      status: 204,
      reply: z.null(),
    });
    fetched.mockResolvedValue(new Response(null, { status: 204 }));
    await expect(call(erase)).resolves.toBeNull();
  });

  it('passes an abort on instead of calling it a fault of the server', async () => {
    const abort = new AbortController();
    abort.abort(new DOMException('left the page', 'AbortError'));
    fetched.mockRejectedValue(abort.signal.reason);
    await expect(call(getSite, { params: { siteId: 'general' }, signal: abort.signal })).rejects.toBe(
      abort.signal.reason,
    );
  });
});
