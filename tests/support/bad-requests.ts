import fc from 'fast-check';
import type supertest from 'supertest';
import type { Contract } from '../../shared/api/contract.ts';
import type { Database } from '../../server/database/database.ts';
import type { SignedIn } from './test-server.ts';

/** Values that programs trip over; no valid input of any route is made of them alone. */
const oddText = fc.oneof(
  fc.string({ unit: 'binary', maxLength: 40 }),
  fc.constantFrom(
    '',
    ' ',
    '../../etc/passwd',
    '%00',
    '%',
    "' OR 1=1 --",
    '<script>alert(1)</script>',
    '${7*7}',
    '\u0000',
    '\u202Etxt',
    '-1',
    '1e309',
    'NaN',
    'null',
    '__proto__',
    'constructor',
    'x'.repeat(5000),
    '9'.repeat(400),
    '=cmd()',
    '\r\nset-cookie: a=b',
  ),
);
const oddValue = fc.oneof(
  { depthSize: 'small' },
  oddText,
  fc.double(),
  fc.constantFrom<unknown>(null, true, -1, 1e308, 2 ** 53, [], {}),
  fc.jsonValue({ maxDepth: 3 }),
);

/** A request that no person would send, to any route. */
export interface BadRequest {
  route: number;
  /** What stands where the path has a parameter after the site. */
  parameter: string;
  query: [string, string][];
  body: unknown;
  /** As JSON, as text that is none, or under another content type. */
  form: 'json' | 'cut json' | 'text' | 'other type';
}

export const badRequest: fc.Arbitrary<BadRequest> = fc.record({
  route: fc.nat(),
  parameter: oddText,
  query: fc.array(
    fc.tuple(fc.constantFrom('before', 'from', 'until', 'event', 'actor', 'search', 'kind', 'at', 'x'), oddText),
    { maxLength: 3 },
  ),
  body: fc.oneof(
    oddValue,
    fc
      .dictionary(
        fc.constantFrom(
          'areas',
          'reason',
          'takenAt',
          'name',
          'siteId',
          'role',
          'from',
          'until',
          'beds',
          'areaId',
          'note',
        ),
        oddValue,
      )
      // A name alone, if it is long enough, is all that a new token needs.
      .map((body) => (typeof body.name === 'string' ? { ...body, name: [body.name] } : body)),
    fc.array(oddValue, { maxLength: 5 }),
  ),
  form: fc.constantFrom('json', 'json', 'json', 'cut json', 'text', 'other type'),
});

/** Signs nobody in or out and starts no work by itself: what a bad request must not reach by luck is left out. */
const leftOut = new Set([
  ...['signIn', 'signInCallback', 'signOut', 'signOutEverywhere', 'lockSession'],
  // Without input, so that no request to them is bad.
  ...['askBackup', 'sendTestMail', 'fitArrivalModel'],
]);

export function routesToTry(contracts: readonly Contract[]): Contract[] {
  return contracts.filter(({ id }) => !leftOut.has(id));
}

/** Half a surrogate pair has no place in an address. */
const wellFormed = (text: string) => text.replaceAll(/\p{Surrogate}/gu, '\uFFFD');

/** Sends a bad request as somebody who may call the route. */
export async function sendBad(
  client: SignedIn,
  contract: Contract,
  siteId: string,
  bad: BadRequest,
): Promise<supertest.Response> {
  const parameter = encodeURIComponent(wellFormed(bad.parameter)) || 'x';
  const path = contract.path.replace(':siteId', siteId).replaceAll(/:\w+/g, parameter);
  const search = new URLSearchParams(bad.query.map(([name, value]): [string, string] => [name, wellFormed(value)]));
  const address = `${path}?${search.toString()}`;
  if (contract.method === 'get') return client.get(address);
  const json = JSON.stringify(bad.body) ?? 'null';
  const text = bad.form === 'cut json' ? json.slice(0, Math.floor(json.length / 2)) : json;
  const type = {
    json: 'application/json',
    'cut json': 'application/json',
    text: 'text/plain',
    'other type': contract.streamedBody ?? 'application/xml',
  }[bad.form];
  return client.send(contract.method, address).set('content-type', type).send(text);
}

/** Rows of every table but sessions, as one text. */
export async function countRows(database: Database): Promise<string> {
  const tables = await database.read.query<{ name: string }[]>(
    "SELECT name FROM sqlite_master WHERE type = 'table' AND name NOT LIKE 'sqlite_%' AND name <> 'session' ORDER BY name",
  );
  const counts: string[] = [];
  for (const { name } of tables) {
    const [{ n }] = await database.read.query<{ n: number }[]>(`SELECT count(*) AS n FROM "${name}"`);
    counts.push(`${name} ${String(n)}`);
  }
  return counts.join(', ');
}
