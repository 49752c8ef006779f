import { deserialize, serialize } from 'node:v8';

/** A value serialised once, in memory that all threads see: handing it over costs nothing. */
export interface SharedValue {
  key: number;
  bytes: SharedArrayBuffer;
}

const shared = new WeakMap<object, SharedValue>();
let values = 0;

/** Shares a value that never changes with the threads; serialised once, as long as the value itself is kept. */
export function shareValue(value: object): SharedValue {
  const known = shared.get(value);
  if (known) return known;
  const plain = serialize(value);
  const bytes = new SharedArrayBuffer(plain.length);
  new Uint8Array(bytes).set(plain);
  values += 1;
  const made = { key: values, bytes };
  shared.set(value, made);
  return made;
}

const keptValues = 8;
const kept = new Map<number, unknown>();

/** A shared value on a thread; the last few are kept, so that each is read once a thread. */
export function readSharedValue({ key, bytes }: SharedValue): unknown {
  if (kept.has(key)) return kept.get(key);
  const value: unknown = deserialize(Buffer.from(bytes));
  if (kept.size >= keptValues) kept.delete(kept.keys().next().value ?? key);
  kept.set(key, value);
  return value;
}
