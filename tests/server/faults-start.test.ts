import { spawn } from 'node:child_process';
import { chmodSync, chownSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { createServer, type AddressInfo, type Server } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { databaseFile, openDatabase } from '../../server/database/database.ts';

/** Who the server runs as where the tests are root, whom permissions do not bind. */
const nobody = 65_534;
const isRoot = process.geteuid?.() === 0;
/** The data folders that are tried, with their permissions and those of the database file. */
const folders = { closed: [0o500, 0o400], 'file only': [0o700, 0o400], 'somebody else’s': [0o000, 0o600] };
let folder: string;
let taken: Server;
let port: number;
let code: number | null;
let said: string[];
const before: Buffer[] = [];

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'shoalmark-faults-'));
  chmodSync(folder, 0o755);
  taken = createServer().listen(0, '127.0.0.1');
  await new Promise((resolve) => taken.once('listening', resolve));
  ({ port } = taken.address() as AddressInfo);
  const dirs: string[] = [];
  for (const [name, [folderMode, fileMode]] of Object.entries({ ...folders, open: [0o700, 0o600] })) {
    const data = join(folder, name);
    dirs.push(data);
    await (await openDatabase(data)).close();
    before.push(readFileSync(databaseFile(data)));
    chmodSync(databaseFile(data), fileMode);
    if (isRoot) for (const each of [databaseFile(data), data]) chownSync(each, nobody, nobody);
    chmodSync(data, folderMode);
  }
  // One process for all: what takes the time is loading it.
  const program = fileURLToPath(new URL('../support/start-without-rights.ts', import.meta.url));
  const child = spawn(process.execPath, ['--import', 'tsx', program, ...dirs], {
    env: {
      ...process.env,
      PORT: String(port),
      BASE_URL: 'https://shoalmark.test',
      OIDC_ISSUER_URL: 'https://provider.test',
      OIDC_CLIENT_ID: 'shoalmark',
      OIDC_CLIENT_SECRET: 'a secret of the provider',
      SESSION_SECRET: 'a secret that is long enough for a start',
    },
    stdio: ['ignore', 'ignore', 'pipe'],
  });
  let text = '';
  child.stderr.on('data', (chunk: Buffer) => (text += chunk.toString()));
  code = await new Promise<number | null>((resolve) => child.once('close', resolve));
  said = text.trimEnd().split('\n');
}, 60_000);
afterAll(() => {
  taken.close();
  for (const name of Object.keys(folders)) chmodSync(join(folder, name), 0o700);
  rmSync(folder, { recursive: true });
});

describe('a start on a data folder that cannot be written', () => {
  test('ends with code 1; each says one line', () => {
    expect(code).toBe(1);
    expect(said).toHaveLength(4);
  });

  test.each([
    ['the folder and its file', 0],
    ['the file alone', 1],
    ['a folder that cannot even be read', 2],
  ])('%s: it says so and what to do, and changes nothing', (_, index) => {
    expect(said[index]).toMatch(/^Cannot start: the database in DATA_DIR cannot be used \(.+\)\. /);
    expect(said[index]).toMatch(
      /Let the user that runs the server write to the folder and its files, and start again\.$/,
    );
    const name = Object.keys(folders)[index];
    chmodSync(join(folder, name), 0o700);
    expect(readFileSync(databaseFile(join(folder, name))).equals(before[index])).toBe(true);
  });

  test('with one that can be written it goes on, here until its port is found taken', () => {
    expect(said[3]).toBe(`Cannot start: PORT ${String(port)} is in use.`);
  });
});
