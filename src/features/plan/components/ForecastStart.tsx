import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { Job } from '../../../../shared/contracts/jobs.ts';
import { Button } from '../../../components/Button.tsx';
import { JobProgress } from '../../../components/ProgressBar.tsx';
import { ProblemNote } from '../../../components/states.tsx';
import { showToast } from '../../../components/toasts.ts';
import { useJob } from '../../../lib/jobs.ts';
import { useRefreshPlans, useStartForecast } from '../queries.ts';

const horizons = [8, 13, 18, 26];

/** Fits and forecasts every line of a category: how many weeks ahead, the button, and then how far it is. */
export function ForecastStart({
  categoryId,
  activeJob,
  mayForecast,
  horizonWeeks,
  action,
  isQuiet = false,
}: {
  categoryId: number;
  activeJob: Job | null;
  mayForecast: boolean;
  /** Weeks planned so far. */
  horizonWeeks: number;
  action: string;
  isQuiet?: boolean;
}) {
  const { t } = useTranslation('plan');
  const refresh = useRefreshPlans();
  const start = useStartForecast(categoryId);
  const choices = [...new Set([...horizons, ...(horizonWeeks >= 4 && horizonWeeks <= 26 ? [horizonWeeks] : [])])].sort(
    (a, b) => a - b,
  );
  const [horizon, setHorizon] = useState(choices.includes(horizonWeeks) ? horizonWeeks : 13);
  const followedId = activeJob?.id ?? start.data?.id ?? null;
  const job = useJob(followedId, (ended) => {
    refresh();
    if (ended.state === 'done') showToast({ tone: 'done', text: t('forecast.done') });
  });
  const isRunning = followedId !== null && (job === null || job.state === 'queued' || job.state === 'running');
  if (isRunning) {
    const shown = job ?? activeJob ?? start.data;
    return (
      <div>
        {shown && <JobProgress job={shown} />}
        <p className="mt-1 text-small text-soft">{t('forecast.mayLeave')}</p>
      </div>
    );
  }
  if (!mayForecast) return null;
  return (
    <div className="flex flex-col gap-2">
      <div className="flex flex-wrap items-center gap-3">
        <label className="flex items-center gap-2 whitespace-nowrap text-soft">
          {t('forecast.horizon')}
          <select
            className="blank !w-auto !min-h-8"
            value={horizon}
            onChange={(event) => setHorizon(Number(event.target.value))}
          >
            {choices.map((weeks) => (
              <option key={weeks} value={weeks}>
                {t('forecast.weeks', { count: weeks })}
              </option>
            ))}
          </select>
        </label>
        <Button variant={isQuiet ? 'quiet' : 'solid'} disabled={start.isPending} onClick={() => start.mutate(horizon)}>
          {action}
        </Button>
      </div>
      {job?.state === 'failed' && <JobProgress job={job} />}
      <ProblemNote error={start.error} />
    </div>
  );
}
