/** Payload of a job that loads a log. */
export interface ImportPayload {
  logId: string;
  checkId: string;
}

export const importJobKind = 'visit-log.import';
