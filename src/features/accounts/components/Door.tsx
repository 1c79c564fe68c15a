import type { ReactNode } from 'react';
import { useTranslation } from 'react-i18next';

const weeks = 104;
const pitch = 9;
const foot = 780;

/** Two invented years as decoration: calm summers, a peak before the turn of the year. */
function heightOf(week: number): number {
  const turn = (week + 9) % 52;
  const season = 34 * Math.cos((2 * Math.PI * (turn - 46)) / 52);
  const peak = 62 * Math.exp(-((turn - 50) ** 2) / 7);
  const ripple = 9 * Math.sin(week * 1.7) + 7 * Math.sin(week * 0.61 + 2);
  return 212 + season + peak + ripple;
}

function Band() {
  const tops = Array.from({ length: weeks }, (_, week) => Math.round(foot - heightOf(week)));
  const threads = tops.flatMap((y, week) =>
    week < weeks - 13 ? [1.5, 4.5, 7.5].map((dx) => `M${week * pitch + dx} ${foot}V${y + 1}`) : [],
  );
  const edge = `M0 ${foot}${tops
    .slice(0, weeks - 13)
    .map((y, week) => `V${y + 0.5}H${(week + 1) * pitch}`)
    .join('')}V${foot}`;
  const columns = tops
    .map((y, week) => (week >= weeks - 13 ? `M${week * pitch + 0.5} ${foot}V${y}h8V${foot}Z` : ''))
    .join('');
  return (
    <svg
      className="absolute bottom-0 left-0 h-full w-full"
      viewBox="0 0 936 900"
      preserveAspectRatio="xMaxYMax slice"
      aria-hidden="true"
    >
      <rect x="-600" y="452" width="1536" height="328" fill="var(--fold)" />
      <path d="M-600 449.5H936M-600 452.5H936" stroke="var(--rule)" strokeWidth=".7" />
      <path d={threads.join('')} stroke="var(--sold-far)" />
      <path d={edge} fill="none" stroke="var(--soft)" />
      <path d={columns} fill="var(--sold)" />
      <path d="M-600 780.5H936" stroke="var(--ink)" />
      {[7, 14, 22, 31, 40, 47, 53, 60, 67, 75, 84, 92, 99].map((week) => (
        <g key={week}>
          <path
            d={`M${week * pitch + 0.5} 424L${week * pitch + 26} 431L${week * pitch + 0.5} 438Z`}
            fill="var(--pennant)"
            stroke="var(--turmeric)"
            strokeWidth=".9"
            strokeLinejoin="round"
          />
          <path d={`M${week * pitch} 423V449`} stroke="var(--turmeric)" strokeWidth="1.4" />
        </g>
      ))}
    </svg>
  );
}

/** The way in: what Fairweek is at the left of the seam, what to fill in at its right. */
export function Door({ title, lead, children }: { title: string; lead?: ReactNode; children: ReactNode }) {
  const { t } = useTranslation('accounts');
  return (
    <div className="grid min-h-dvh grid-cols-1 min-[900px]:grid-cols-[65fr_2px_35fr]">
      <header className="relative hidden min-h-[640px] overflow-hidden min-[900px]:block">
        <Band />
        <div className="absolute top-16 left-16">
          <p className="font-display text-[92px]/[92px] font-[680] tracking-[-0.03em] [font-stretch:88%]">Fairweek</p>
          <p className="mt-4 max-w-[420px] text-[20px]/7 text-soft">{t('promise')}</p>
        </div>
      </header>
      <div className="seam hidden min-[900px]:block" aria-hidden="true" />
      <main className="flex flex-col bg-sheet px-8 py-12 min-[1280px]:px-[88px]">
        <div className="my-auto w-full max-w-[400px]">
          <h1>{title}</h1>
          {lead && <div className="mt-1 text-soft">{lead}</div>}
          {children}
        </div>
        <p className="mt-10 max-w-[400px] text-small/[17px] text-soft">{t('caution')}</p>
      </main>
    </div>
  );
}
