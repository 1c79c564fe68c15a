import { Fragment, type ReactNode } from 'react';

export interface RouteStep {
  name: string;
  label: string;
  /** Drawn within 14 × 14, in the colour given. */
  mark: (colour: string) => ReactNode;
}

/** Stations of a way: the line between them is solid where passed, dotted where to come; `action` stands on the next stretch. */
export function RouteSteps({
  label,
  steps,
  reached,
  action,
  stretch = 96,
}: {
  label: string;
  steps: readonly RouteStep[];
  reached: number;
  action?: ReactNode;
  /** Length of a stretch, px. */
  stretch?: number;
}) {
  return (
    <div className="flex h-[50px] items-start px-8">
      <ol className="sr-only" aria-label={label}>
        {steps.map((step, index) => (
          <li key={step.name} aria-current={index === reached ? 'step' : undefined}>
            {step.label}
          </li>
        ))}
      </ol>
      {steps.map((step, index) => (
        <Fragment key={step.name}>
          {index > 0 && (
            <div className="flex h-8 items-center">
              <Stretch isPassed={index <= reached} length={index === reached + 1 && action ? 28 : stretch} />
              {index === reached + 1 && action && (
                <>
                  {action}
                  <Stretch isPassed={false} length={28} />
                </>
              )}
            </div>
          )}
          <div className="relative h-8 w-[14px]" aria-hidden="true">
            <svg className="absolute top-[9px]" width="14" height="14" viewBox="0 0 14 14">
              {step.mark(index <= reached ? 'var(--ink)' : 'var(--rule)')}
            </svg>
            <span
              className={`absolute top-[34px] left-[7px] -translate-x-1/2 text-small whitespace-nowrap ${
                index === reached ? 'font-[640]' : 'text-soft'
              }`}
            >
              {step.label}
            </span>
          </div>
        </Fragment>
      ))}
    </div>
  );
}

function Stretch({ isPassed, length }: { isPassed: boolean; length: number }) {
  return (
    <svg className="shrink-0" width={length} height="2" aria-hidden="true">
      <path
        d={`M${isPassed ? 0 : 3} 1H${isPassed ? length : length - 3}`}
        stroke={isPassed ? 'var(--ink)' : 'var(--rule)'}
        strokeWidth="2"
        strokeDasharray={isPassed ? undefined : '2 4'}
      />
    </svg>
  );
}
