import { readdir, readFile, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { z } from 'zod';

/** What stands beside each backup, and what a restore is held against. */
export const backupManifest = z.object({
  /** UTC seconds. */
  madeAt: z.int(),
  softwareVersion: z.string(),
  bytes: z.int(),
  sha256: z.string(),
  counts: z.record(z.string(), z.int()),
  chain: z.object({ whole: z.boolean(), rows: z.int(), head: z.string() }),
  migrations: z.array(z.string()),
});
export type BackupManifest = z.infer<typeof backupManifest>;

export interface BackupFile {
  name: string;
  file: string;
  manifest: BackupManifest;
}

const pattern = /^shoalmark-\d{8}-\d{6}\.sqlite$/;

/** The file's name of a backup made at an instant, for instance shoalmark-20260117-030000.sqlite (UTC). */
export function backupName(at: number): string {
  const [date, time] = new Date(at * 1000).toISOString().slice(0, 19).replaceAll(/[-:]/g, '').split('T');
  return `shoalmark-${date}-${time}.sqlite`;
}

export function manifestOf(file: string): string {
  return file.replace(/\.sqlite$/, '.json');
}

/** The manifest beside a backup; null without one that can be read. */
export async function readManifest(file: string): Promise<BackupManifest | null> {
  try {
    return backupManifest.parse(JSON.parse(await readFile(manifestOf(file), 'utf8')));
  } catch {
    return null;
  }
}

/** Whole backups of a folder, newest first: those whose manifest and size fit. */
export async function listBackups(dir: string): Promise<BackupFile[]> {
  const names = (await readdir(dir).catch(() => [] as string[])).filter((name) => pattern.test(name));
  const found: BackupFile[] = [];
  for (const name of names) {
    const file = join(dir, name);
    const manifest = await readManifest(file);
    const size = (await stat(file).catch(() => null))?.size;
    if (manifest && size === manifest.bytes) found.push({ name, file, manifest });
  }
  return found.sort((a, b) => b.manifest.madeAt - a.manifest.madeAt || b.name.localeCompare(a.name));
}

/** Deletes all but the newest backups, and what an interrupted one left; returns how many went. */
export async function pruneBackups(dir: string, keep: number): Promise<number> {
  const old = (await listBackups(dir)).slice(keep);
  for (const { file } of old) {
    await rm(file, { force: true });
    await rm(manifestOf(file), { force: true });
  }
  for (const name of await readdir(dir).catch(() => [] as string[])) {
    if (/^shoalmark-.*\.part(-journal)?$/.test(name)) await rm(join(dir, name), { force: true });
  }
  return old.length;
}
