import { parseArgs } from 'node:util';
import { readDataDir } from '../config.ts';
import { openDatabase } from '../database/database.ts';
import { grantAdministrator, type Named } from '../features/people/grant-administrator.ts';

/**
 * `npm run grant-admin -- ADDRESS`: makes the person with this verified e-mail address an administrator; somebody
 * who has not signed in yet is bound at the first sign-in. `-- --issuer URL --subject ID` names an identity itself.
 */
const usage =
  'Usage: npm run grant-admin -- ADDRESS (an e-mail address)\n       npm run grant-admin -- --issuer URL --subject ID (somebody who has signed in)\n';

function readNamed(): Named | null {
  try {
    const { values, positionals } = parseArgs({
      allowPositionals: true,
      options: { issuer: { type: 'string' }, subject: { type: 'string' } },
    });
    const { issuer, subject } = values;
    if (issuer !== undefined && subject !== undefined && positionals.length === 0) return { issuer, subject };
    const email = positionals.at(0)?.trim().toLowerCase();
    const isAddress = email !== undefined && /^[^\s@]+@[^\s@]+$/.test(email);
    return isAddress && positionals.length === 1 && issuer === undefined && subject === undefined ? { email } : null;
  } catch {
    return null;
  }
}

const named = readNamed();
if (!named) {
  process.stderr.write(usage);
  process.exit(2);
}
const who = 'email' in named ? named.email : named.subject;
const database = await openDatabase(readDataDir(process.env));
try {
  const outcome = await grantAdministrator(database, named, Math.floor(Date.now() / 1000));
  if (outcome === null) {
    process.stderr.write(`Nobody of ${who} has signed in; nothing was changed.\n`);
    process.exitCode = 1;
  } else process.stdout.write(`${who} ${outcome}.\n`);
} catch (error) {
  if (!(error instanceof RangeError)) throw error;
  process.stderr.write(`${error.message} Nothing was changed.\n`);
  process.exitCode = 1;
} finally {
  await database.close();
}
