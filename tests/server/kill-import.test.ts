import { expect, test } from 'vitest';
import { killImports, type KilledImport } from '../support/kill-import.ts';

const rows = 20_000;

// More kills, of a longer import, are in tests/soak.
test('a server killed at any moment of an import leaves all of a log or none, and the next start loads it once', async () => {
  const killed: KilledImport[] = [];
  await killImports({ rows, kills: 2, seed: 5 }, (one) => killed.push(one));
  expect(killed).toHaveLength(2);
  for (const one of killed) {
    if (one.statusAfterKill === 'ready')
      expect(one, JSON.stringify(one)).toMatchObject({ countedAfterKill: rows, storedAfterKill: rows });
    else expect(one, JSON.stringify(one)).toMatchObject({ statusAfterKill: 'loading', countedAfterKill: 0 });
    expect(one, JSON.stringify(one)).toMatchObject({
      statusAfterStart: 'ready',
      countedAfterStart: rows,
      storedAfterStart: rows,
      left: [],
    });
  }
}, 400_000);
