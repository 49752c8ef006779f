/** A fault of the whole file: where, and what to do about it. */
export interface FileFault {
  at: string;
  message: string;
}
