/** A reply while it holds. */
interface Entry {
  now: number;
  writes: number;
  standing: string;
  body: Promise<string>;
}

/**
 * Replies that are the same for everybody who may ask: made once for all who ask within a second in which nothing is
 * stored. A department's screens ask for the same page over and over; each reply costs some milliseconds of the one thread
 * that answers.
 */
export class SharedReplies {
  private readonly entries = new Map<string, Entry>();
  private readonly writes: () => number;

  /** @param writes how often something was stored so far that a reply could show */
  constructor(writes: () => number) {
    this.writes = writes;
  }

  /**
   * @param key route, site and query
   * @param now UTC seconds
   * @param standing what the reply depends on besides database and clock
   * @param make the reply as JSON
   */
  of(key: string, now: number, standing: string, make: () => Promise<string>): Promise<string> {
    const writes = this.writes();
    const known = this.entries.get(key);
    if (known && known.now === now && known.writes === writes && known.standing === standing) return known.body;
    for (const [other, entry] of this.entries) if (entry.now !== now) this.entries.delete(other);
    const body = make();
    this.entries.set(key, { now, writes, standing, body });
    // A failure is told to those who already wait for it, and to nobody else.
    body.catch(() => {
      if (this.entries.get(key)?.body === body) this.entries.delete(key);
    });
    return body;
  }
}
