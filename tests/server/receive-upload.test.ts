import { createHash } from 'node:crypto';
import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Readable } from 'node:stream';
import { gzipSync } from 'node:zlib';
import express from 'express';
import supertest from 'supertest';
import { afterEach, beforeEach, expect, test } from 'vitest';
import { HttpError } from '../../server/errors.ts';
import { receiveUpload } from '../../server/features/visit-logs/receive-upload.ts';

const most = 10_000;
let folder: string;
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'shoalmark-receive-'));
});
afterEach(() => {
  rmSync(folder, { recursive: true, force: true });
});

/** Receives one body with a limit of 10,000 bytes. */
function receive(body: Buffer, type: string, { stream = false, encoding = '' } = {}) {
  const app = express();
  app.post('/', async (req, res) => {
    try {
      res.json(await receiveUpload(req, join(folder, 'deeper', 'received'), most));
    } catch (error) {
      if (!(error instanceof HttpError)) throw error;
      res.status(error.status).json(error.toProblem(undefined));
    }
  });
  const request = supertest(app).post('/').set('content-type', type);
  if (encoding) request.set('content-encoding', encoding);
  if (!stream) return request.send(body);
  // Without a stated length, in pieces.
  request.set('transfer-encoding', 'chunked');
  return new Promise<supertest.Response>((resolve, reject) => {
    const pieces = Array.from({ length: Math.ceil(body.length / 1000) }, (_, index) =>
      body.subarray(index * 1000, (index + 1) * 1000),
    );
    request.on('error', reject);
    request.on('response', resolve);
    Readable.from(pieces).pipe(request as unknown as NodeJS.WritableStream);
  });
}

const kept = () => readdirSync(join(folder, 'deeper'));

test.each([
  ['plain', (text: Buffer) => text, 'text/csv; charset=utf-8', ''],
  ['gzip by type', (text: Buffer) => gzipSync(text), 'application/gzip', ''],
  ['gzip by encoding', (text: Buffer) => gzipSync(text), 'text/csv', 'gzip'],
])('%s: the text arrives, with its size and its hash', async (_, pack, type, encoding) => {
  const text = Buffer.from('one,two\n'.repeat(1000));
  const reply = await receive(pack(text), type, { encoding });
  expect(reply.body).toEqual({ bytes: text.length, sha256: createHash('sha256').update(text).digest('hex') });
  expect(readFileSync(join(folder, 'deeper', 'received')).equals(text)).toBe(true);
});

test('one byte over the limit without a stated length is refused while it streams', async () => {
  const reply = await receive(Buffer.alloc(most + 1, 'a'), 'text/csv', { stream: true });
  expect(reply.status).toBe(413);
  expect(kept()).toEqual([]);
});

test('a small gzip that unpacks past the limit is refused while it streams', async () => {
  const packed = gzipSync(Buffer.alloc(1_000_000, 'a'));
  expect(packed.length).toBeLessThan(most);
  const reply = await receive(packed, 'application/gzip');
  expect(reply.status).toBe(413);
  expect(kept()).toEqual([]);
});

test('text of exactly the limit is accepted', async () => {
  const reply = await receive(Buffer.alloc(most, 'a'), 'text/csv', { stream: true });
  expect(reply.status).toBe(200);
});
