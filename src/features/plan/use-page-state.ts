import { useCallback, useEffect, useRef, useState } from 'react';
import { useSearchParams } from 'react-router-dom';
import { readPageState, writePageState, type PageState } from './page-state.ts';

const settleMs = 250;

/**
 * The page's state, kept at hand so that the keyboard never waits for the address, which follows once things are still. A link or the browser's
 * back button changes the state in turn.
 */
export function usePageState(): [PageState, (change: Partial<PageState>) => void] {
  const [search, setSearch] = useSearchParams();
  const [state, setState] = useState(() => readPageState(search));
  const written = useRef(search.toString());
  useEffect(() => {
    if (search.toString() === written.current) return;
    const before = readPageState(new URLSearchParams(written.current));
    written.current = search.toString();
    const now = readPageState(search);
    // Other parts of the address, such as the category, are not this page's.
    if (JSON.stringify(before) !== JSON.stringify(now)) setState(now);
  }, [search]);
  useEffect(() => {
    const next = writePageState(search, state).toString();
    if (next === search.toString()) return;
    const timer = setTimeout(() => {
      written.current = next;
      setSearch(new URLSearchParams(next), { replace: true });
    }, settleMs);
    return () => clearTimeout(timer);
  }, [state, search, setSearch]);
  const change = useCallback((part: Partial<PageState>) => setState((held) => ({ ...held, ...part })), []);
  return [state, change];
}
