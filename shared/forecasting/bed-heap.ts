/** Times at which beds are free, the earliest first. */
export interface BedHeap {
  size(): number;
  /** The earliest time; undefined when empty is the caller's to avoid. */
  first(): number;
  add(at: number): void;
  /** Takes the earliest bed away; nothing when there is none. */
  removeFirst(): void;
  /** The earliest bed is taken until `at`. */
  replaceFirst(at: number): void;
  clear(): void;
}

/** A binary heap in one array. @param capacity most beds at a time; it grows if need be. Cost: log₂ beds a call. */
export function makeBedHeap(capacity: number): BedHeap {
  let times = new Float64Array(Math.max(4, capacity + 1));
  let count = 0;

  function sink(at: number): void {
    const last = count;
    const heap = times;
    let hole = 0;
    for (;;) {
      let child = 2 * hole + 1;
      if (child >= last) break;
      if (child + 1 < last && heap[child + 1] < heap[child]) child += 1;
      if (heap[child] >= at) break;
      heap[hole] = heap[child];
      hole = child;
    }
    heap[hole] = at;
  }

  return {
    size: () => count,
    first: () => times[0],
    add(at) {
      if (count === times.length) {
        const larger = new Float64Array(2 * count);
        larger.set(times);
        times = larger;
      }
      let hole = count;
      count += 1;
      while (hole > 0) {
        const parent = (hole - 1) >> 1;
        if (times[parent] <= at) break;
        times[hole] = times[parent];
        hole = parent;
      }
      times[hole] = at;
    },
    removeFirst() {
      if (count === 0) return;
      count -= 1;
      if (count > 0) sink(times[count]);
    },
    replaceFirst: sink,
    clear() {
      count = 0;
    },
  };
}
