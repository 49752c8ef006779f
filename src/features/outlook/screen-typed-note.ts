import { withArticle } from '../../../shared/domain/identifier-kind.ts';

/**
 * Screens a note before it leaves the browser; what screens comes with the first note, since most rounds save none.
 * @returns why it cannot be sent, null if it can. The server checks the same again.
 */
export async function screenTypedNote(note: string): Promise<string | null> {
  try {
    const { screenNote } = await import('../../../shared/domain/screen-note.ts');
    const kind = screenNote(note);
    return kind && `This looks like ${withArticle(kind)}. Leave out anything that could identify a patient.`;
  } catch {
    return 'This note could not be checked for what could identify a patient, so it was not sent. It is still here: check the connection and try again.';
  }
}
