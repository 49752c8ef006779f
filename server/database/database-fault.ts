/** What keeps a database from being used; everything else that SQLite reports is a fault of ours. */
export type DatabaseFaultKind = 'no room' | 'locked' | 'not writable' | 'damaged';

export interface DatabaseFault {
  kind: DatabaseFaultKind;
  /** SQLite's own words. */
  message: string;
}

// SQLite's result codes (sqlite.org/rescode.html) and those of the system for files beside the database.
const kinds: [RegExp, DatabaseFaultKind][] = [
  [/^(SQLITE_FULL|ENOSPC|EDQUOT)/, 'no room'],
  [/^SQLITE_(BUSY|LOCKED)/, 'locked'],
  [/^(SQLITE_(READONLY|CANTOPEN|PERM|AUTH|IOERR)|EROFS)/, 'not writable'],
  [/^SQLITE_(NOTADB|CORRUPT)/, 'damaged'],
];

/** The fault behind an error of TypeORM, better-sqlite3 or the file system; null for any other error. */
export function databaseFaultOf(error: unknown): DatabaseFault | null {
  if (!(error instanceof Error)) return null;
  const cause: unknown = 'driverError' in error ? error.driverError : error;
  if (!(cause instanceof Error) || !('code' in cause) || typeof cause.code !== 'string') return null;
  const { code } = cause;
  const kind = kinds.find(([pattern]) => pattern.test(code))?.[1];
  return kind === undefined ? null : { kind, message: cause.message };
}
