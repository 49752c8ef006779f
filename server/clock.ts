/** Tells the time, UTC seconds. Handed in, so that tests can set it. */
export type Clock = () => number;

/** The machine's clock, moved by an offset in seconds (0 in production). */
export function systemClock(offset = 0): Clock {
  return () => Math.floor(Date.now() / 1000) + offset;
}
