import { useEffect } from 'react';

/** Puts `Ground coffee – Fairweek` on the browser's tab. */
export function useTitle(title: string | null | undefined): void {
  useEffect(() => {
    document.title = title ? `${title} – Fairweek` : 'Fairweek';
  }, [title]);
}
