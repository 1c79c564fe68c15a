import type { WaitingEntry } from '../../../shared/contracts/waiting.ts';
import { isIsoDate } from '../../../shared/domain/weeks.ts';
import { formatDate, formatUnits } from '../../lib/format.ts';

/** A key of the feature's texts with what fills its gaps. */
export interface Wording {
  key: string;
  values: Record<string, string | number>;
  /** What another person wrote: shown as a quotation. */
  isQuoted: boolean;
}

/** What stands below an entry's title; null where there is nothing more to say. */
export function wordDetail(entry: WaitingEntry): Wording | null {
  const values = { count: entry.count, n: formatUnits(entry.count), category: entry.categoryName ?? '' };
  const plain = (key: string) => ({ key, values, isQuoted: false });
  switch (entry.kind) {
    case 'import-to-check':
      return plain(entry.count === 0 ? 'detail.importClean' : 'detail.importRefused');
    case 'line-to-submit':
      if (entry.detail === null) return null;
      return {
        key: 'detail.due',
        values: { date: isIsoDate(entry.detail) ? formatDate(entry.detail) : entry.detail },
        isQuoted: false,
      };
    case 'line-returned':
    case 'line-to-review':
      return entry.detail === null ? null : { key: 'detail.said', values: { text: entry.detail }, isQuoted: true };
    case 'override-due-another-look':
      return plain('detail.moved');
    case 'override-needs-decision':
      return plain('detail.unmet');
    case 'pack-to-build':
      return plain('detail.lockedSince');
    case 'no-sales-yet':
    case 'no-forecast-yet':
    case 'forecast-behind-sales':
    case 'set-up-category':
    case 'set-up-people':
      return plain(`detail.${entry.kind}`);
    case 'pack-ready':
      return null;
  }
}
