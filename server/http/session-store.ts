import { Store, type SessionData } from 'express-session';
import { LessThan, type EntityManager } from 'typeorm';
import type { Clock } from '../clock.ts';
import type { Database } from '../database/database.ts';
import { SessionRow } from '../entities/SessionRow.ts';

/** A session in which nobody has signed in yet lives this long: a sign-in under way. */
const unsignedSeconds = 3600;

/** A clock that is corrected by so little ends nobody's session. */
const clockSlackSeconds = 300;

/** Sessions in the database. They end a fixed time after the sign-in, however much they are used. Writes go through the one gate. */
export class SessionStore extends Store {
  private readonly database: Database;
  private readonly clock: Clock;
  private readonly lifetimeSeconds: number;
  /** Ids that were ended: a request that was under way meanwhile must not bring its session back. */
  private readonly ended = new Set<string>();

  constructor(database: Database, clock: Clock, lifetimeSeconds = 12 * 3600) {
    super();
    this.database = database;
    this.clock = clock;
    this.lifetimeSeconds = lifetimeSeconds;
  }

  /** The clock that sessions live by, UTC seconds. */
  now(): number {
    return this.clock();
  }

  override get(sid: string, done: (error: unknown, session?: SessionData | null) => void): void {
    this.database.read
      .findOneBy(SessionRow, { sid })
      .then((row) => {
        done(null, row && this.stands(row) ? (JSON.parse(row.data) as SessionData) : null);
      })
      .catch(done);
  }

  /** False once it has run out, and for one that would outlive its time because the clock was set back. */
  private stands({ expiresAt }: SessionRow): boolean {
    const now = this.clock();
    return expiresAt > now && expiresAt <= now + this.lifetimeSeconds + clockSlackSeconds;
  }

  override set(sid: string, session: SessionData, done?: (error?: unknown) => void): void {
    const { personId = null } = session as Partial<SessionData>;
    const expiresAt = personId === null ? this.clock() + unsignedSeconds : session.signedInAt + this.lifetimeSeconds;
    const row = { sid, expiresAt, personId, data: JSON.stringify(session) };
    this.database
      .write(async (manager) => {
        if (!this.ended.has(sid)) await manager.upsert(SessionRow, row, ['sid']);
      })
      .then(() => done?.())
      .catch((error: unknown) => done?.(error));
  }

  /** The end is fixed: nothing to move on. */
  override touch(_sid: string, _session: SessionData, done?: () => void): void {
    done?.();
  }

  override destroy(sid: string, done?: (error?: unknown) => void): void {
    this.database
      .write(async (manager) => {
        await manager.delete(SessionRow, { sid });
        this.ended.add(sid);
      })
      .then(() => done?.())
      .catch((error: unknown) => done?.(error));
  }

  /**
   * Ends every session of a person.
   * @param alongside what belongs to it (its audit row), in the same transaction; told how many ended
   */
  async endAllOf(
    personId: string,
    alongside: (manager: EntityManager, count: number) => Promise<void>,
  ): Promise<number> {
    return this.database.write(async (manager) => {
      const rows = await manager.find(SessionRow, { where: { personId }, select: { sid: true } });
      await manager.delete(SessionRow, { personId });
      await alongside(manager, rows.length);
      for (const { sid } of rows) this.ended.add(sid);
      return rows.length;
    });
  }

  /** The sessions of a person that stand, with their ids. */
  async listOf(personId: string): Promise<{ sid: string; session: SessionData }[]> {
    const rows = await this.database.read.findBy(SessionRow, { personId });
    return rows
      .filter((row) => this.stands(row))
      .map(({ sid, data }) => ({ sid, session: JSON.parse(data) as SessionData }));
  }

  /**
   * Ends one session of a person; false if there is no such.
   * @param alongside what belongs to it (its audit row), in the same transaction
   */
  async endOne(sid: string, personId: string, alongside: (manager: EntityManager) => Promise<void>): Promise<boolean> {
    return this.database.write(async (manager) => {
      const { affected } = await manager.delete(SessionRow, { sid, personId });
      if (affected !== 1) return false;
      await alongside(manager);
      this.ended.add(sid);
      return true;
    });
  }

  /** Removes what has run out. */
  async sweep(): Promise<void> {
    await this.database.write((manager) => manager.delete(SessionRow, { expiresAt: LessThan(this.clock()) }));
    // No request is under way for an hour.
    this.ended.clear();
  }
}
