/** A long test: it prints what it measured, and throws where that is not good enough. */
export interface Soak {
  name: string;
  run: (print: (line: string) => void) => Promise<void> | void;
}
