import { queryOptions } from '@tanstack/react-query';
import { LineFitView } from '../../../shared/contracts/lines.ts';
import { request } from '../../lib/api.ts';

export const lineFitQuery = (lineId: number) =>
  queryOptions({
    queryKey: ['line-fit', lineId],
    queryFn: ({ signal }) => request(LineFitView, `/lines/${lineId}/fit`, { signal }),
  });
