const key = 'last-site';

/** The site this device looked at last, so that the next visit starts there. */
export function lastSite(): string | null {
  try {
    return localStorage.getItem(key);
  } catch {
    return null;
  }
}

export function rememberSite(siteId: string): void {
  try {
    localStorage.setItem(key, siteId);
  } catch {
    // Storage is refused: the next visit starts at the first site.
  }
}
