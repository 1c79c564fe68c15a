import { useSyncExternalStore } from 'react';

const query = '(min-width: 1440px)';

/** Whether a drawer has room beside the grid. */
export function useWideScreen(): boolean {
  return useSyncExternalStore(
    (listener) => {
      const list = window.matchMedia(query);
      list.addEventListener('change', listener);
      return () => list.removeEventListener('change', listener);
    },
    () => window.matchMedia(query).matches,
  );
}
