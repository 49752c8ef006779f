import { Store, type SessionData } from 'express-session';
import { LessThan } from 'typeorm';
import type { Clock } from '../clock.ts';
import type { Database } from '../database/database.ts';
import { SessionRow } from '../entities/SessionRow.ts';

const lifetimeSeconds = 12 * 3600;
/** A session's end is moved on at most this often, so that reading does not write. */
const touchEverySeconds = 60;

/** Sessions in the database. They live 12 hours from their last use. Writes go through the one gate. */
export class SessionStore extends Store {
  private readonly database: Database;
  private readonly clock: Clock;

  constructor(database: Database, clock: Clock) {
    super();
    this.database = database;
    this.clock = clock;
  }

  override get(sid: string, done: (error: unknown, session?: SessionData | null) => void): void {
    this.database.read
      .findOneBy(SessionRow, { sid })
      .then((row) => {
        done(null, row && row.expiresAt > this.clock() ? (JSON.parse(row.data) as SessionData) : null);
      })
      .catch(done);
  }

  override set(sid: string, session: SessionData, done?: (error?: unknown) => void): void {
    const row = { sid, expiresAt: this.clock() + lifetimeSeconds, data: JSON.stringify(session) };
    this.database
      .write((manager) => manager.upsert(SessionRow, row, ['sid']))
      .then(() => done?.())
      .catch((error: unknown) => done?.(error));
  }

  override touch(sid: string, _session: SessionData, done?: () => void): void {
    const expiresAt = this.clock() + lifetimeSeconds;
    this.database.read
      .findOneBy(SessionRow, { sid })
      .then((row) =>
        row && row.expiresAt < expiresAt - touchEverySeconds
          ? this.database.write((manager) => manager.update(SessionRow, { sid }, { expiresAt }))
          : undefined,
      )
      .catch(() => undefined)
      .finally(() => done?.());
  }

  override destroy(sid: string, done?: (error?: unknown) => void): void {
    this.database
      .write((manager) => manager.delete(SessionRow, { sid }))
      .then(() => done?.())
      .catch((error: unknown) => done?.(error));
  }

  /** Removes what has run out. */
  async sweep(): Promise<void> {
    await this.database.write((manager) => manager.delete(SessionRow, { expiresAt: LessThan(this.clock()) }));
  }
}
