import type { ReactNode } from 'react';

/** A table in Fairweek's print; scrolls sideways by itself where it must. `caption` is read aloud. */
export function Table({
  caption,
  className = '',
  children,
}: {
  caption: string;
  className?: string;
  children: ReactNode;
}) {
  return (
    <table className={`ledger ${className}`}>
      <caption className="sr-only">{caption}</caption>
      {children}
    </table>
  );
}
