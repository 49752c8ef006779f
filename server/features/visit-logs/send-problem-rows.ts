import { createReadStream } from 'node:fs';
import { stat } from 'node:fs/promises';
import { createInterface } from 'node:readline';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { problemRowsHeader } from '../../../shared/domain/problem-rows.ts';
import type { getProblemRows as contract } from '../../../shared/api/visit-logs.ts';
import { notFound } from '../../errors.ts';
import type { SiteContext } from '../../http/route.ts';
import { findChecked, problemRowsFile } from './checked-file.ts';

/** Sends the problem rows of a checked file as CSV, all or one kind; the header alone if there are none. */
export async function sendProblemRows({
  deps,
  site,
  params,
  query,
  now,
  res,
}: SiteContext<typeof contract>): Promise<undefined> {
  const { dataDir } = deps.config;
  const checked = await findChecked(dataDir, site.id, params.checkId, now);
  if (!checked) throw notFound('This check');
  const file = problemRowsFile(dataDir, checked.checkId);
  const exists = (await stat(file).catch(() => null)) !== null;
  res.status(200);
  res.type('text/csv; charset=utf-8');
  res.setHeader('cache-control', 'no-store');
  res.setHeader('content-disposition', 'attachment; filename="problem-rows.csv"');
  await pipeline(Readable.from(exists ? linesOf(file, query.kind) : [`${problemRowsHeader}\r\n`]), res);
  return undefined;
}

async function* linesOf(file: string, kind: string | undefined): AsyncGenerator<string> {
  let text = '';
  for await (const line of createInterface({ input: createReadStream(file), crlfDelay: Infinity })) {
    if (kind === undefined || line === problemRowsHeader || line.endsWith(`,${kind}`)) text += `${line}\r\n`;
    if (text.length < 65_536) continue;
    yield text;
    text = '';
  }
  yield text;
}
