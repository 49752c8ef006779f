/** Payload of a job that loads a log. */
export interface ImportPayload {
  logId: string;
  checkId: string;
  /** Sent by a site's own system with its token. */
  byToken?: boolean;
}

export const importJobKind = 'visit-log.import';
