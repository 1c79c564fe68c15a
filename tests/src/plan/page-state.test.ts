import { describe, expect, it } from 'vitest';
import { readPageState, writePageState, type PageState } from '../../../src/features/plan/page-state.ts';

const changed: PageState = {
  down: 'series',
  locationId: 3,
  from: '2026-10-19',
  to: '2027-02-15',
  cell: { row: 'i12l3', weekStart: '2026-12-14' },
  head: { row: 'total', weekStart: '2026-12-21' },
  version: 11,
  isWhyOpen: false,
  isVersionsOpen: true,
};

describe('page state in the address', () => {
  it('brings the same view back', () => {
    expect(readPageState(writePageState(new URLSearchParams(), changed))).toEqual(changed);
  });

  it('keeps what belongs to others and leaves out what is as at first', () => {
    const search = writePageState(new URLSearchParams('category=2'), readPageState(new URLSearchParams()));
    expect(search.toString()).toBe('category=2');
  });

  it('takes nothing from an address that was tampered with', () => {
    const search = new URLSearchParams(
      'down=people&location=-1&from=2026-13-01&to=soon&cell=<b>.2026-12-14&head=i1.2026-02-30&version=1e9',
    );
    expect(readPageState(search)).toEqual(readPageState(new URLSearchParams()));
  });
});
