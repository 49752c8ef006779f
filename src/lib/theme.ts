import { useSyncExternalStore } from 'react';

export type Theme = 'light' | 'dark';
const key = 'theme';
const listeners = new Set<() => void>();
const systemDark = () => window.matchMedia('(prefers-color-scheme: dark)');

function stored(): Theme | null {
  const value = document.documentElement.dataset.theme;
  return value === 'light' || value === 'dark' ? value : null;
}

function currentTheme(): Theme {
  return stored() ?? (systemDark().matches ? 'dark' : 'light');
}

function subscribe(listener: () => void) {
  const media = systemDark();
  listeners.add(listener);
  media.addEventListener('change', listener);
  return () => {
    listeners.delete(listener);
    media.removeEventListener('change', listener);
  };
}

/** Sets the theme on this device. Choosing what the system has goes back to following the system. */
function chooseTheme(theme: Theme): void {
  const follows = theme === (systemDark().matches ? 'dark' : 'light');
  if (follows) delete document.documentElement.dataset.theme;
  else document.documentElement.dataset.theme = theme;
  try {
    if (follows) localStorage.removeItem(key);
    else localStorage.setItem(key, theme);
  } catch {
    // Storage is refused: the choice holds until the page is left.
  }
  for (const listener of listeners) listener();
}

/** The theme in force and how to switch it. */
export function useTheme(): { theme: Theme; chooseTheme: (theme: Theme) => void } {
  return { theme: useSyncExternalStore(subscribe, currentTheme), chooseTheme };
}
