import { checkDatabase, type DatabaseFacts } from '../../database/check-database.ts';

/** Checks a database file on a thread of its own. */
export default function check(file: string): Promise<DatabaseFacts> {
  return checkDatabase(file);
}
