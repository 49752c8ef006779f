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

/**
 * A binary heap in one array, whose unused places hold Infinity: which of two children is earlier is then told by adding
 * a comparison, without a branch that the processor guesses wrong half of the time.
 * @param capacity most beds at a time; it grows if need be. Cost: log₂ beds a call.
 */
export function makeBedHeap(capacity: number): BedHeap {
  let times = new Float64Array(2 * Math.max(4, capacity + 1)).fill(Infinity);
  let count = 0;

  function sink(at: number): void {
    const last = count;
    const heap = times;
    let hole = 0;
    let child = 1;
    while (child < last) {
      child += Number(heap[child + 1] < heap[child]);
      const earlier = heap[child];
      if (earlier >= at) break;
      heap[hole] = earlier;
      hole = child;
      child = 2 * hole + 1;
    }
    heap[hole] = at;
  }

  return {
    size: () => count,
    first: () => times[0],
    add(at) {
      if (2 * count + 2 > times.length) {
        const larger = new Float64Array(4 * count + 4).fill(Infinity);
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
      const last = times[count];
      times[count] = Infinity;
      if (count > 0) sink(last);
    },
    replaceFirst: sink,
    clear() {
      times.fill(Infinity, 0, count);
      count = 0;
    },
  };
}
