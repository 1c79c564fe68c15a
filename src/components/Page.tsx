import type { ReactNode } from 'react';

/** What stands below the top bar: the weekline, where the place has one, and the page. `fill` keeps it within the window. */
export function Page({
  weekline,
  fill = false,
  className = '',
  children,
}: {
  weekline?: ReactNode;
  fill?: boolean;
  className?: string;
  children: ReactNode;
}) {
  return (
    <div className={fill ? 'flex min-h-[480px] [flex:1_1_0px] flex-col overflow-hidden' : 'flex flex-1 flex-col'}>
      {weekline}
      <main
        id="main"
        tabIndex={-1}
        className={`flex-1 outline-none ${fill ? 'min-h-0' : 'px-6 pt-4 pb-10'} ${className}`}
      >
        {children}
      </main>
    </div>
  );
}

/** Heading of a page with what one can do there at its right. */
export function PageHead({ title, lead, actions }: { title: ReactNode; lead?: ReactNode; actions?: ReactNode }) {
  return (
    <div className="flex flex-wrap items-start justify-between gap-x-8 gap-y-2">
      <div className="min-w-0">
        <h1>{title}</h1>
        {lead && <p className="mt-1 text-soft">{lead}</p>}
      </div>
      {actions && <div className="flex items-center gap-6">{actions}</div>}
    </div>
  );
}

/** A part of a page under its own strong rule. */
export function Section({
  title,
  aside,
  className = '',
  children,
}: {
  title: ReactNode;
  aside?: ReactNode;
  className?: string;
  children: ReactNode;
}) {
  return (
    <section className={`border-t border-rule pt-2 ${className}`}>
      <div className="mb-2 flex items-baseline justify-between gap-4">
        <h2>{title}</h2>
        {aside && <div className="text-small text-soft">{aside}</div>}
      </div>
      {children}
    </section>
  );
}
