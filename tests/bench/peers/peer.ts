import { execFileSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { fileURLToPath } from 'node:url';

// Debian puts its Python packages beside its own interpreter, which need not be the first one found.
const python = existsSync('/usr/bin/python3') ? '/usr/bin/python3' : 'python3';

/** A program that a user might take instead, run on the same work. Every one of them may be absent. */
export interface Peer {
  name: string;
  /** Debian's package that brings it. */
  package: string;
  program: string;
  /** What answers without fault if it is there. */
  probe: readonly string[];
}

export const simpy: Peer = {
  name: 'SimPy',
  package: 'python3-simpy3',
  program: python,
  probe: ['-c', 'import simpy; assert int(simpy.__version__.split(".")[0]) >= 3'],
};
export const glm: Peer = { name: 'R glm', package: 'r-base-core', program: 'Rscript', probe: ['-e', 'glm'] };
export const statsmodels: Peer = {
  name: 'statsmodels',
  package: 'python3-statsmodels',
  program: python,
  probe: ['-c', 'import statsmodels.formula.api'],
};
export const sqlite: Peer = {
  name: 'sqlite3 .import',
  package: 'sqlite3',
  program: 'sqlite3',
  probe: ['--version'],
};

const found = new Map<Peer, boolean>();

/** True if a peer is there; the first time that it is not, a line says how to get it. */
export function isPresent(peer: Peer): boolean {
  const known = found.get(peer);
  if (known !== undefined) return known;
  let present = true;
  try {
    execFileSync(peer.program, peer.probe, { stdio: 'ignore' });
  } catch {
    present = false;
    process.stdout.write(`${peer.name} not present, so nothing is compared with it: apt-get install ${peer.package}\n`);
  }
  found.set(peer, present);
  return present;
}

/** Runs one of the scripts beside this file with a peer and answers with what it wrote. */
export function runScript(peer: Peer, script: string, args: readonly string[], input = ''): string {
  const file = fileURLToPath(new URL(script, import.meta.url));
  return execFileSync(peer.program, [file, ...args], {
    input,
    encoding: 'utf8',
    maxBuffer: 1 << 28,
    stdio: ['pipe', 'pipe', 'inherit'],
  });
}
