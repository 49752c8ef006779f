import { mkdir, readdir, readFile, rm, stat, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { problemRowsCsv, type ProblemRows } from '../../../shared/domain/problem-rows.ts';
import type { CountedFile } from '../../../shared/domain/hourly-count.ts';
import type { VisitReport } from '../../../shared/domain/visit-report.ts';
import { visitLogLimits } from '../../../shared/api/visit-logs.ts';

/** What is kept beside a checked file until it is accepted: counts only. */
export interface CheckedFile {
  checkId: string;
  siteId: string;
  personId: string;
  fileName: string;
  sha256: string;
  bytes: number;
  checkedAt: number;
  report: VisitReport;
  /** What a file of hourly counts holds; null for visits. */
  counted: CountedFile | null;
}

const prefix = 'visit-log-';

/** The folder for files that wait; nothing in it outlives its hour. */
export function temporaryFolder(dataDir: string): string {
  return join(dataDir, 'tmp');
}

/** Where the text of a checked file stands. */
export function checkedTextFile(dataDir: string, checkId: string): string {
  return join(temporaryFolder(dataDir), `${prefix}${checkId}.csv`);
}

function factsFile(dataDir: string, checkId: string): string {
  return join(temporaryFolder(dataDir), `${prefix}${checkId}.json`);
}

/** Where the numbers of its problem rows stand; there is no such file without problem rows. */
export function problemRowsFile(dataDir: string, checkId: string): string {
  return join(temporaryFolder(dataDir), `${prefix}${checkId}.problems.csv`);
}

export async function keepChecked(
  dataDir: string,
  checked: CheckedFile,
  problemRows: readonly ProblemRows[],
): Promise<void> {
  await mkdir(temporaryFolder(dataDir), { recursive: true });
  if (problemRows.length > 0)
    await writeFile(problemRowsFile(dataDir, checked.checkId), problemRowsCsv(problemRows), { mode: 0o600 });
  await writeFile(factsFile(dataDir, checked.checkId), JSON.stringify(checked), { mode: 0o600 });
}

/** The checked file if it is the site's and its hour is not over; null otherwise. */
export async function findChecked(
  dataDir: string,
  siteId: string,
  checkId: string,
  now: number,
): Promise<CheckedFile | null> {
  const text = await readFile(factsFile(dataDir, checkId), 'utf8').catch(() => null);
  if (text === null) return null;
  const checked = JSON.parse(text) as CheckedFile;
  return checked.siteId === siteId && now < checked.checkedAt + visitLogLimits.checkKeptFor ? checked : null;
}

/** Deletes a checked file and what is kept beside it; no error if it is gone. */
export async function forgetChecked(dataDir: string, checkId: string): Promise<void> {
  await rm(checkedTextFile(dataDir, checkId), { force: true });
  await rm(problemRowsFile(dataDir, checkId), { force: true });
  await rm(factsFile(dataDir, checkId), { force: true });
}

/**
 * Deletes files that nobody accepted within their hour, and what half-sent uploads left behind.
 * @param inUse ids of checks that a load still reads
 * @param starting true at the server's start: no upload can be under way, so a file without its facts is a leftover
 */
export async function sweepChecked(
  dataDir: string,
  inUse: ReadonlySet<string>,
  { starting }: { starting: boolean },
): Promise<void> {
  const folder = temporaryFolder(dataDir);
  const names: string[] = await readdir(folder).catch(() => []);
  for (const name of names) {
    const id = /^visit-log-([\w-]+)\.(?:csv|json|problems\.csv)$/.exec(name)?.[1];
    if (id === undefined || inUse.has(id)) continue;
    const file = join(folder, name);
    const written = await stat(file).catch(() => null);
    if (!written) continue;
    // The file system's own clock, which made the time of writing, and not the application's.
    const isOver = (Date.now() - written.mtimeMs) / 1000 > visitLogLimits.checkKeptFor;
    const isLeftOver = starting && !names.includes(`visit-log-${id}.json`);
    if (isOver || isLeftOver) await rm(file, { force: true });
  }
}
