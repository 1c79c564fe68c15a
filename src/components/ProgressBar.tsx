import { useTranslation } from 'react-i18next';
import type { Job } from '../../shared/contracts/jobs.ts';

/** value from 0 to 1. */
export function ProgressBar({ value, label }: { value: number; label: string }) {
  const percent = Math.round(Math.min(1, Math.max(0, value)) * 100);
  return (
    <div className="flex items-center gap-3">
      <div
        role="progressbar"
        aria-label={label}
        aria-valuenow={percent}
        aria-valuemin={0}
        aria-valuemax={100}
        className="h-2 min-w-[120px] flex-1 border-b border-ink bg-fold"
      >
        <div className="h-full bg-moss transition-[width] duration-300" style={{ width: `${percent}%` }} />
      </div>
      <span className="num w-10 text-small text-soft" aria-hidden="true">
        {percent}&#8239;%
      </span>
    </div>
  );
}

/** Background work as it goes: words of its stage, and how far. Says so when it failed. */
export function JobProgress({ job }: { job: Job }) {
  const { t } = useTranslation('common');
  const kind = t(`job.kind.${job.kind.replace('.', '-')}`);
  if (job.state === 'failed') {
    return (
      <p role="alert" className="border-l-2 border-madder py-1 pl-3 text-madder">
        <b>{t('job.failed', { kind })}</b> {job.problem?.detail}
      </p>
    );
  }
  const stage =
    job.state === 'queued'
      ? t('job.queued')
      : job.message
        ? t(`job.message.${job.message.key}`, { ...job.message.values, defaultValue: '' })
        : '';
  return (
    <div className="max-w-[520px]">
      <p className="mb-1 text-small" role="status">
        <b>{kind}</b> <span className="text-soft">{stage}</span>
      </p>
      <ProgressBar value={job.state === 'done' ? 1 : job.progress} label={kind} />
    </div>
  );
}
