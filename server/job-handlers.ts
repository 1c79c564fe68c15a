import type { JobHandler, JobKind } from './features/jobs/jobs.service.ts';
import { buildPackJob } from './features/packs/packs.jobs.ts';
import { forecastCategoryJob } from './features/plan/plan.jobs.ts';
import { acceptImportJob, readImportJob, withdrawImportJob } from './features/sales/sales.jobs.ts';

/** Who does which kind of job. */
export const jobHandlers: Readonly<Record<JobKind, JobHandler>> = {
  'import.read': readImportJob,
  'import.accept': acceptImportJob,
  'import.withdraw': withdrawImportJob,
  'forecast.category': forecastCategoryJob,
  'pack.build': buildPackJob,
};
