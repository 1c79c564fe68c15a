import type { ReactNode } from 'react';

/** A table in Fairweek's print; scrolls sideways by itself on a narrow or zoomed page. `caption` is read aloud. */
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
    <div className="relative max-[1000px]:overflow-x-auto">
      <table className={`ledger ${className}`}>
        <caption className="sr-only">{caption}</caption>
        {children}
      </table>
    </div>
  );
}
