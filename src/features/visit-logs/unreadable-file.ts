/** A file that is no log of ours; the message says what it is and what to do. */
export class UnreadableFileError extends Error {
  override name = 'UnreadableFileError';
}
