import { describe, expect, it } from 'vitest';
import type { WaitingEntry } from '../../../../shared/contracts/waiting.ts';
import { listGlanceWeeks, sumLine } from '../../../../src/features/waiting/glance.ts';
import { formatDate } from '../../../../src/lib/format.ts';
import { wordDetail } from '../../../../src/features/waiting/wording.ts';

const entry = (kind: WaitingEntry['kind'], change: Partial<WaitingEntry> = {}): WaitingEntry => ({
  kind,
  categoryId: 1,
  categoryName: 'Tea',
  subject: 'Green tea',
  detail: null,
  count: 1,
  stake: null,
  at: null,
  link: '/',
  ...change,
});

describe('what stands below an entry', () => {
  it('is the due date of a line to submit', () => {
    expect(wordDetail(entry('line-to-submit', { detail: '2026-12-08' }))).toMatchObject({
      key: 'detail.due',
      values: { date: formatDate('2026-12-08') },
    });
  });

  it('is what the other person wrote, as a quotation', () => {
    expect(wordDetail(entry('line-returned', { detail: 'W52 looks low' }))).toMatchObject({
      isQuoted: true,
      values: { text: 'W52 looks low' },
    });
    expect(wordDetail(entry('line-to-review'))).toBeNull();
  });

  it('tells a file without faults from one with rows left out', () => {
    expect(wordDetail(entry('import-to-check', { count: 0 }))?.key).toBe('detail.importClean');
    expect(wordDetail(entry('import-to-check', { count: 4 }))?.key).toBe('detail.importRefused');
  });
});

describe('the category at a glance', () => {
  const sold = Array.from({ length: 60 }, (_, index) => index);

  it('shows thirteen weeks either side of the seam, each with its week of a year before', () => {
    const weeks = listGlanceWeeks({
      firstWeek: '2025-10-06',
      sold,
      planned: Array.from({ length: 20 }, () => 100),
      promotedWeeks: [],
      lockedWeeks: [],
      holidays: [],
    });
    expect(weeks).toHaveLength(26);
    expect(weeks[0]).toEqual({ units: 47, isPlanned: false, lastYear: null });
    expect(weeks[12]).toEqual({ units: 59, isPlanned: false, lastYear: 7 });
    expect(weeks[13]).toEqual({ units: 100, isPlanned: true, lastYear: 8 });
  });

  it('compares with last year only where every week of it is known', () => {
    expect(sumLine([100, 110], [100, 100])).toEqual({ planned: 210, againstLastYear: expect.closeTo(0.05, 12) });
    expect(sumLine([100, 110], [100, null]).againstLastYear).toBeNull();
    expect(sumLine([], []).againstLastYear).toBeNull();
  });
});
