import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import type { ReactNode } from 'react';
import { MemoryRouter } from 'react-router-dom';
import { beforeAll, describe, expect, it, vi } from 'vitest';
import type { ImportDetail } from '../../../../shared/contracts/sales.ts';
import { startTexts } from '../../../../src/app/i18n.ts';
import { FileReading } from '../../../../src/features/sales/components/FileReading.tsx';
import { Findings } from '../../../../src/features/sales/components/Findings.tsx';
import { ImportBar } from '../../../../src/features/sales/components/ImportBar.tsx';
import { NewNames } from '../../../../src/features/sales/components/NewNames.tsx';
import { WeeksBeside } from '../../../../src/features/sales/components/WeeksBeside.tsx';
import { categoriesQuery } from '../../../../src/lib/categories.ts';
import { sessionQuery } from '../../../../src/lib/session.ts';
import { settingsQuery } from '../../../../src/lib/settings.ts';

beforeAll(() => startTexts());

const totals = {
  rowsRead: 6,
  rowsTaken: 4,
  rowsRefused: 2,
  rowsRepaired: 1,
  weeks: 2,
  items: 2,
  locations: 1,
  units: 300,
  netValue: 1234.5,
  firstWeek: '2026-11-16',
  lastWeek: '2026-11-23',
  keysHeld: 2,
  keysChanged: 1,
  byWeek: [
    { weekStart: '2026-11-16', units: 100, unitsHeld: 90, rows: 2 },
    { weekStart: '2026-11-23', units: 200, unitsHeld: null, rows: 2 },
  ],
};

const detail: ImportDetail = {
  id: 7,
  kind: 'sales',
  fileName: 'sales.xlsx',
  sha256: 'ab',
  sizeBytes: 2000,
  state: 'to-check',
  at: '2026-12-01T08:00:00Z',
  by: 'Ilse Brandt',
  acceptedAt: null,
  rowsTaken: 4,
  rowsRefused: 2,
  firstWeek: '2026-11-16',
  lastWeek: '2026-11-23',
  units: 300,
  mapping: {
    kind: 'sales',
    sheet: 'Sales',
    headerRow: 3,
    columns: [
      { index: 0, header: 'Week', meaning: 'week', confidence: 1 },
      { index: 1, header: 'Article', meaning: 'item', confidence: 0.5 },
      { index: 2, header: 'Sold', meaning: 'units', confidence: 1 },
    ],
    decimalMark: '.',
    weekDateIs: 'first-day',
    firstWeekday: 1,
    valueIncludesVat: false,
    categoryId: null,
    lineId: null,
    newLineName: null,
  },
  sample: [['2026-W48', 'Tea', '12']],
  sheets: [{ name: 'Sales', isHidden: false, rows: 6 }],
  totals,
  unknown: null,
  findingCounts: [
    { kind: 'no-item', verdict: 'refused', count: 2 },
    { kind: 'text-number', verdict: 'repaired', count: 1 },
  ],
  findings: [
    {
      sheet: 'Sales',
      cell: 'B9',
      row: 9,
      kind: 'no-item',
      before: null,
      after: null,
      verdict: 'refused',
      detail: 'The row names no item.',
    },
    {
      sheet: 'Sales',
      cell: 'C5',
      row: 5,
      kind: 'text-number',
      before: '1,204',
      after: '1204',
      verdict: 'repaired',
      detail: 'A number stored as text.',
    },
  ],
  refusal: null,
  sameFileAs: null,
  lockedWeeks: [],
  mayAccept: true,
  mayWithdraw: true,
  activeJob: null,
};

/** A page of somebody who plans the one category, with what the shell has fetched already. */
function Shown({ children }: { children: ReactNode }) {
  const client = new QueryClient({ defaultOptions: { queries: { staleTime: Infinity } } });
  client.setQueryData(categoriesQuery.queryKey, {
    categories: [{ id: 1, name: 'Hot drinks', lines: [{ id: 4, name: 'Tea' }], lastSalesWeek: '2026-11-16' }],
    firstWeekday: 1,
  });
  client.setQueryData(sessionQuery.queryKey, {
    person: {
      id: 2,
      name: 'Ilse Brandt',
      email: 'ilse@ostrel.example',
      assignments: [{ role: 'planner', categoryId: 1 }],
      isDataSteward: false,
    },
    isDemo: true,
  });
  client.setQueryData(settingsQuery.queryKey, {
    companyName: 'Ostrel',
    holidayCountry: '',
    currency: 'EUR',
    firstWeekday: 1,
    horizonWeeks: 13,
    noteThreshold: 0.25,
    lookThreshold: 0.1,
  });
  return (
    <QueryClientProvider client={client}>
      <MemoryRouter>{children}</MemoryRouter>
    </QueryClientProvider>
  );
}

describe('the reading of a file', () => {
  const reading = (change: Partial<Parameters<typeof FileReading>[0]> = {}) => {
    const onChange = vi.fn();
    render(
      <Shown>
        <FileReading
          detail={detail}
          mapping={detail.mapping!}
          obstacle={null}
          isChanged={false}
          onChange={onChange}
          onRead={() => undefined}
          {...change}
        />
      </Shown>,
    );
    return onChange;
  };

  it('lets a column be given another meaning', async () => {
    const onChange = reading();
    await userEvent.selectOptions(screen.getByLabelText('Column B, Article, means'), 'line');
    expect(onChange.mock.calls[0]?.[0].columns[1]).toMatchObject({ meaning: 'line', confidence: 1 });
  });

  it('marks a guess, and numbers the rows as the file does', () => {
    reading();
    expect(screen.getByText('a guess')).toBeTruthy();
    const row = screen.getByRole('row', { name: /2026-W48/ });
    expect(within(row).getByText('4')).toBeTruthy();
  });

  it('says what the server still asks for', () => {
    reading({ obstacle: 'Choose the category of these rows.' });
    expect(screen.getByText('Choose the category of these rows.')).toBeTruthy();
  });

  it('can’t be changed once the file is in force', () => {
    reading({ detail: { ...detail, state: 'accepted' } });
    for (const choice of screen.getAllByRole('combobox')) expect(choice).toBeDisabled();
  });
});

describe('the decision about a file', () => {
  const bar = (change: Partial<Parameters<typeof ImportBar>[0]> = {}) =>
    render(
      <Shown>
        <ImportBar
          detail={detail}
          isChanged={false}
          obstacle={null}
          isYesMissing={false}
          createUnknown={false}
          {...change}
        />
      </Shown>,
    );

  it('names how many rows it takes', () => {
    bar();
    expect(screen.getByRole('button', { name: 'Accept 4 rows' })).toBeEnabled();
    expect(screen.getByText('€1,234.50')).toBeTruthy();
  });

  it.each([
    [{ isYesMissing: true }, 'Say yes to the new names first, or drop the file.'],
    [{ isChanged: true }, 'Read it again first: you’ve changed how.'],
    [{ obstacle: 'Choose the line.' }, 'Choose the line.'],
  ])('waits, and says for what: %j', (change, advice) => {
    bar(change);
    const accept = screen.getByRole('button', { name: 'Accept 4 rows' });
    expect(accept).toBeDisabled();
    expect(accept).toHaveAccessibleDescription(advice);
  });

  it('is not offered to who may not take it', () => {
    bar({ detail: { ...detail, mayAccept: false } });
    expect(screen.queryByRole('button')).toBeNull();
  });

  it('of a file in force is to withdraw it, where one may', () => {
    bar({ detail: { ...detail, state: 'accepted', acceptedAt: '2026-12-01T08:05:00Z' } });
    expect(screen.getByRole('button', { name: 'Withdraw' })).toBeTruthy();
    expect(screen.queryByRole('button', { name: /Accept/ })).toBeNull();
  });
});

it('weeks say whether they are new, the same or changed', () => {
  render(<WeeksBeside totals={totals} isSales />);
  expect(within(screen.getByRole('row', { name: /2026-W47/ })).getByText('total changes')).toBeTruthy();
  expect(within(screen.getByRole('row', { name: /2026-W47/ })).getByText('+10')).toBeTruthy();
  expect(within(screen.getByRole('row', { name: /2026-W48/ })).getByText('new week')).toBeTruthy();
});

it('findings give place, reason and what became of it, and the refused rows as a file', () => {
  render(<Findings detail={detail} />);
  expect(screen.getByText('The row names no item.')).toBeTruthy();
  expect(screen.getByText('The first 1 of 2.')).toBeTruthy();
  const repaired = screen.getByRole('row', { name: /Sales, C5/ });
  expect(within(repaired).getByText('1204')).toBeTruthy();
  expect(screen.getByRole('link', { name: 'Download the rows left out' }).getAttribute('href')).toBe(
    '/api/imports/7/refused.csv',
  );
});

it('new names are made only after a yes', async () => {
  const onYes = vi.fn();
  render(
    <NewNames
      unknown={{
        categories: [],
        lines: [{ category: 'Hot drinks', line: 'Cocoa' }],
        items: [{ item: 'C-1', name: 'Cocoa 250 g', line: 'Cocoa' }],
        locations: [],
      }}
      isYes={false}
      onYes={onYes}
    />,
  );
  expect(screen.getByText('Cocoa 250 g (C-1)')).toBeTruthy();
  await userEvent.click(screen.getByRole('checkbox', { name: 'Yes, make them' }));
  expect(onYes).toHaveBeenCalledWith(true);
});
