import { useSyncExternalStore } from 'react';

export type Theme = 'light' | 'dark';
const storageKey = 'fairweek-theme';
const listeners = new Set<() => void>();

function storedTheme(): Theme | null {
  try {
    const stored = localStorage.getItem(storageKey);
    return stored === 'light' || stored === 'dark' ? stored : null;
  } catch {
    return null;
  }
}

/** The person's choice, else what the system prefers. */
function preferredTheme(): Theme {
  return storedTheme() ?? (window.matchMedia('(prefers-color-scheme: dark)').matches ? 'dark' : 'light');
}

function shownTheme(): Theme {
  return document.documentElement.dataset.theme === 'dark' ? 'dark' : 'light';
}

function showTheme(theme: Theme): void {
  document.documentElement.dataset.theme = theme;
  for (const listener of listeners) listener();
}

/** Before the first paint, so that the page never changes its colours while it loads. */
export function startTheme(): void {
  showTheme(preferredTheme());
}

export function useTheme(): { theme: Theme; switchTheme: () => void } {
  const theme = useSyncExternalStore((listener) => {
    listeners.add(listener);
    return () => listeners.delete(listener);
  }, shownTheme);
  const switchTheme = () => {
    const next = theme === 'dark' ? 'light' : 'dark';
    try {
      localStorage.setItem(storageKey, next);
    } catch {
      // A browser that stores nothing still shows the other theme until the page is left.
    }
    showTheme(next);
  };
  return { theme, switchTheme };
}
