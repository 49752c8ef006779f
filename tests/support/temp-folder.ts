import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

const made = new Set<string>();

function removeAll(): void {
  for (const folder of made) rmSync(folder, { recursive: true, force: true });
  made.clear();
}

/** A new folder in the system's temporary one. What a test that was stopped did not remove goes when its process ends. */
export function makeTempFolder(name: string): string {
  if (made.size === 0) {
    process.once('exit', removeAll);
    // A runner that is told to stop ends its processes by this signal, without their own end.
    process.once('SIGTERM', () => process.exit(143));
  }
  const folder = mkdtempSync(join(tmpdir(), `shoalmark-${name}-`));
  made.add(folder);
  return folder;
}

/** Removes such a folder before the process ends. */
export function removeTempFolder(folder: string): void {
  rmSync(folder, { recursive: true, force: true });
  made.delete(folder);
}
