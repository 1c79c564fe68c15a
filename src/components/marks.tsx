import type { ReactNode } from 'react';

/** Fairweek's own mark: weeks sold, the seam, weeks to come. */
export function FairweekMark() {
  return (
    <svg width="25" height="18" viewBox="0 0 25 18" aria-hidden="true">
      <g fill="var(--ink)">
        <rect x="0" y="9" width="2.4" height="7" />
        <rect x="3.4" y="7" width="2.4" height="9" />
        <rect x="6.8" y="10" width="2.4" height="6" />
        <rect x="10.2" y="4" width="2.4" height="12" />
      </g>
      <path d="M14.6 0V3.4M14.6 5V8.4M14.6 10V13.4M14.6 15V18" stroke="var(--moss)" strokeWidth="1.5" />
      <g fill="none" stroke="var(--ink)">
        <rect x="17.1" y="6.5" width="1.6" height="9" />
        <rect x="20.1" y="9.5" width="1.6" height="6" />
        <rect x="23.1" y="7.5" width="1.4" height="8" />
      </g>
    </svg>
  );
}

interface MarkProps {
  /** Read aloud; without it the mark is decoration. */
  label?: string;
}

function Mark({
  label,
  width,
  height,
  viewBox,
  children,
}: MarkProps & {
  width: number;
  height: number;
  viewBox: string;
  children: ReactNode;
}) {
  const naming = label === undefined ? { 'aria-hidden': true } : { role: 'img', 'aria-label': label };
  return (
    <svg className="inline-block shrink-0" width={width} height={height} viewBox={viewBox} {...naming}>
      {children}
    </svg>
  );
}

/** A promotion. */
export function PennantMark({ label }: MarkProps) {
  return (
    <Mark label={label} width={11} height={13} viewBox="0 0 11 13">
      <path
        d="M1 .5L10.5 4.7L1 9Z"
        fill="var(--pennant)"
        stroke="var(--turmeric)"
        strokeWidth=".9"
        strokeLinejoin="round"
      />
      <path d="M1 0V13" stroke="var(--turmeric)" strokeWidth="1.4" />
    </Mark>
  );
}

/** A holiday. */
export function LozengeMark({ label }: MarkProps) {
  return (
    <Mark label={label} width={14} height={9} viewBox="0 0 14 9">
      <path d="M0 4.5H14" stroke="var(--rule)" />
      <path d="M7 .5L11 4.5L7 8.5L3 4.5Z" fill="var(--ink)" />
    </Mark>
  );
}

/** An override that is due another look. */
export function RingMark({ label }: MarkProps) {
  return (
    <Mark label={label} width={9} height={9} viewBox="0 0 10 10">
      <circle cx="5" cy="5" r="4" fill="none" stroke="var(--plum)" strokeWidth="1.6" />
    </Mark>
  );
}

/** A plan outside the model's 95 % range. */
export function ForkMark({ label }: MarkProps) {
  return (
    <Mark label={label} width={7} height={10} viewBox="0 0 8 11">
      <path d="M1 .5V3.4Q1 5.6 4 5.6Q7 5.6 7 3.4V.5M4 .5V10.8" fill="none" stroke="var(--ink)" strokeWidth="1.2" />
    </Mark>
  );
}

/** The model reaches beyond what was ever seen: an arrow that leaves its wall. */
export function BeyondMark({ label }: MarkProps) {
  return (
    <Mark label={label} width={9} height={9} viewBox="0 0 9 9">
      <path d="M1 .5V8.5M2.8 4.5H8M5.8 2.3L8 4.5L5.8 6.7" fill="none" stroke="var(--madder)" strokeWidth="1.2" />
    </Mark>
  );
}

/** Locked weeks. */
export function FootMark({ label }: MarkProps) {
  return (
    <Mark label={label} width={20} height={13} viewBox="0 0 20 13">
      <path d="M.5 0V9M10 0V9M19.5 0V9" stroke="var(--rule)" strokeWidth=".8" />
      <rect y="9" width="20" height="4" fill="var(--ink)" />
    </Mark>
  );
}

export function CaretMark() {
  return (
    <svg className="shrink-0" width="9" height="6" viewBox="0 0 9 6" aria-hidden="true">
      <path d="M1 1l3.5 3.5L8 1" fill="none" stroke="currentColor" strokeWidth="1.3" />
    </svg>
  );
}

export function ArrowMark() {
  return (
    <svg className="inline-block shrink-0" width="14" height="8" viewBox="0 0 14 8" aria-hidden="true">
      <path d="M0 4H12M9 1l3.4 3L9 7" fill="none" stroke="currentColor" strokeWidth="1.3" />
    </svg>
  );
}
