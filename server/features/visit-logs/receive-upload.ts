import { createHash } from 'node:crypto';
import { createWriteStream } from 'node:fs';
import { mkdir, rm } from 'node:fs/promises';
import { dirname } from 'node:path';
import { Readable, Transform } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { createGunzip } from 'node:zlib';
import type { Request } from 'express';
import { HttpError } from '../../errors.ts';

/**
 * Streams a request's body into a file, unpacked if it is gzipped, hashing as it goes. Whatever goes
 * wrong, the file is gone afterwards.
 * @param mostBytes of the unpacked text
 * @returns size and SHA-256 of the unpacked text
 */
export async function receiveUpload(
  req: Request,
  file: string,
  mostBytes: number,
): Promise<{ bytes: number; sha256: string }> {
  const packed = isPacked(req);
  if (Number(req.headers['content-length'] ?? 0) > mostBytes) throw tooLarge(mostBytes);
  await mkdir(dirname(file), { recursive: true });
  const hash = createHash('sha256');
  let bytes = 0;
  const meter = new Transform({
    transform(chunk: Buffer, _encoding, done) {
      bytes += chunk.length;
      if (bytes > mostBytes) {
        done(tooLarge(mostBytes));
        return;
      }
      hash.update(chunk);
      done(null, chunk);
    },
  });
  try {
    // Not the request itself: a failing pipeline would destroy it, and the refusal could not be sent.
    const source = Readable.from(bodyOf(req, mostBytes), { objectMode: false });
    const target = createWriteStream(file, { mode: 0o600, flags: 'wx' });
    if (packed) await pipeline(source, createGunzip(), meter, target);
    else await pipeline(source, meter, target);
  } catch (error) {
    await rm(file, { force: true });
    throw inWords(error);
  }
  return { bytes, sha256: hash.digest('hex') };
}

async function* bodyOf(req: Request, mostBytes: number): AsyncGenerator<Buffer> {
  let bytes = 0;
  for await (const chunk of req.iterator({ destroyOnReturn: false })) {
    const piece = chunk as Buffer;
    bytes += piece.length;
    if (bytes > mostBytes) throw tooLarge(mostBytes);
    yield piece;
  }
}

function isPacked(req: Request): boolean {
  const type = (req.headers['content-type'] ?? '').split(';')[0].trim().toLowerCase();
  const encoding = (req.headers['content-encoding'] ?? 'identity').trim().toLowerCase();
  if (type === 'application/gzip' || type === 'application/x-gzip') return true;
  if (type === 'text/csv' && encoding === 'gzip') return true;
  if (type === 'text/csv' && encoding === 'identity') return false;
  throw new HttpError(415, 'Type not accepted', 'A visit log is sent as text/csv or application/gzip.', {
    kept: 'Nothing was stored.',
    next: 'Send CSV with the header content-type: text/csv.',
  });
}

function tooLarge(mostBytes: number): HttpError {
  return new HttpError(
    413,
    'File too large',
    `A visit log may have ${(mostBytes / 1e6).toLocaleString('en')} MB of text at most.`,
    { kept: 'Nothing was stored.', next: 'Split the file by period and load the parts.' },
  );
}

function inWords(error: unknown): unknown {
  if (error instanceof HttpError) return error;
  const code = (error as NodeJS.ErrnoException).code ?? '';
  if (code.startsWith('Z_')) {
    return new HttpError(422, 'File refused', 'The gzip file is damaged or cut short.', {
      kept: 'Nothing was stored.',
      next: 'Pack it again, or send the CSV as it is.',
    });
  }
  if (code === 'ENOSPC') {
    return new HttpError(507, 'No room', 'The server has no room left for the file.', {
      kept: 'Nothing was stored.',
      next: 'Tell the administrator.',
    });
  }
  if (code === 'ECONNRESET' || code === 'ERR_STREAM_PREMATURE_CLOSE') {
    return new HttpError(400, 'Upload cut short', 'The upload ended before the whole file had arrived.', {
      kept: 'Nothing was stored.',
      next: 'Send it again.',
    });
  }
  return error;
}
