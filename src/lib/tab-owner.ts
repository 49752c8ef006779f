const key = 'tab-owner';

/**
 * Makes a person the owner of this tab. What another person had typed here is forgotten: at a shared
 * workstation nobody may find, or save, the figures of the one before.
 */
export function claimTab(personId: string): void {
  try {
    const owner = sessionStorage.getItem(key);
    if (owner !== null && owner !== personId) sessionStorage.clear();
    sessionStorage.setItem(key, personId);
  } catch {
    // Storage is refused: then nothing typed was kept either.
  }
}
