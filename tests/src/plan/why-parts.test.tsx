import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { afterEach, beforeAll, describe, expect, it, vi } from 'vitest';
import type { LinePlan, WhyNumber } from '../../../shared/contracts/plan.ts';
import { startTexts } from '../../../src/app/i18n.ts';
import { WhyParts } from '../../../src/features/plan/components/WhyParts.tsx';

beforeAll(() => startTexts());
afterEach(() => vi.unstubAllGlobals());

const plan = {
  line: { id: 7, name: 'Ground coffee' },
  version: { number: 14 },
  overrides: [
    {
      id: 5,
      scope: { itemId: 1, locationId: null },
      operation: 'scale by',
      value: 1.1,
      author: 'Ilse Brandt',
    },
  ],
} as unknown as LinePlan;
const row = {
  key: 'i1',
  kind: 'item' as const,
  scope: { itemId: 1, locationId: null },
  label: 'Ground coffee 500 g',
  detail: null,
  seriesIndexes: [0],
};
const why: WhyNumber = {
  scope: row.scope,
  weekStart: '2026-12-14',
  version: 14,
  series: 1,
  base: {
    units: 2583,
    parts: [
      { name: 'level', units: 2300, factor: null },
      { name: 'price', units: -100, factor: 0.96 },
      { name: 'season', units: 383, factor: 1.17 },
      { name: 'holiday', units: 0, factor: 1 },
      { name: 'trend', units: 0, factor: 1 },
      { name: 'recent level', units: 0, factor: 1 },
    ],
  },
  uplift: {
    units: 2001.6,
    factor: 1.775,
    parts: [
      { name: 'promotion', units: 2225.6, factor: 1.89 },
      { name: 'around', units: 0, factor: 1 },
      { name: 'neighbours', units: -224, factor: 0.94 },
    ],
  },
  rounding: 0.4,
  model: 4585,
  overrides: { units: 459, steps: [{ overrideIds: [5], units: 459 }] },
  held: 0,
  plan: 5044,
  lastYear: { weekStart: '2025-12-15', units: 5568 },
  lastPromotion: {
    firstWeek: '2026-05-11',
    lastWeek: '2026-05-18',
    weeks: 2,
    depth: 0.25,
    isFeatured: true,
    isDisplayed: false,
    unitsAWeek: 4000,
    ordinaryUnitsAWeek: 2000,
  },
};

function show(answers: (() => Response | Promise<Response>)[], shownPlan = 5044, hasUnsaved = false): void {
  vi.stubGlobal('fetch', () => Promise.resolve((answers.length > 1 ? answers.shift()! : answers[0]!)()));
  render(
    <QueryClientProvider client={new QueryClient({ defaultOptions: { queries: { retry: false } } })}>
      <WhyParts
        plan={plan}
        row={row}
        weekStart={why.weekStart}
        shownPlan={shownPlan}
        hasUnsaved={hasUnsaved}
        promotions={['Advent feature']}
        lockedIn={null}
      />
    </QueryClientProvider>,
  );
}
const answer = (value: object): Response => Response.json(value);
const refuse = (type: string, status: number): Response =>
  new Response(
    JSON.stringify({ type: `/problems/${type}`, title: 'Not now', status, detail: 'Try it later.', instance: 'r-9' }),
    { status, headers: { 'content-type': 'application/problem+json' } },
  );
const lines = (): string[] =>
  within(screen.getByRole('table', { name: 'Parts of the number' }))
    .getAllByRole('row')
    .slice(1)
    .map((line) => line.textContent.replaceAll('\u00a0', ' '));

describe('the parts of a number', () => {
  it('lead from the level over base, uplift and model to the plan, with what a person changed', async () => {
    show([() => answer(why)]);
    await screen.findByRole('table');
    expect(lines()).toEqual([
      'Level2,300',
      'Price× 0.96−100',
      'Season× 1.17+383',
      'Base2,583',
      'Promotion× 1.89+2,226',
      'Neighbours× 0.94−224',
      'Uplift× 1.78+2,002',
      'Modelmean4,585',
      'By Ilse Brandt× 1.10+459',
      'Plan5,044',
    ]);
  });

  it('say what the model already includes for which promotion, and what the last one like it did', async () => {
    show([() => answer(why)]);
    expect((await screen.findByText(/already includes/)).parentElement?.textContent).toBe(
      'The model already includes +2,002 for Advent feature.',
    );
    const last = screen.getByText(/Last one like it/).textContent.replaceAll('\u00a0', ' ');
    expect(last).toContain('2026-W20 to 2026-W21 (25 % off, advertised): 4,000 units a week against 2,000');
  });

  it('show a change that isn’t saved beside what was saved', async () => {
    show([() => answer(why)], 5100, true);
    await screen.findByRole('table');
    expect(lines().slice(-3)).toEqual(['By Ilse Brandt× 1.10+459', 'Not saved yet+56', 'Plan5,100']);
  });

  it('show an earlier version’s number with its overrides as one', async () => {
    show([() => answer(why)], 4400);
    await screen.findByRole('table');
    expect(lines().slice(-2)).toEqual(['Overrides−185', 'Plan4,400']);
  });

  it('say that they are being read, and after a failure what to do, and come at a second try', async () => {
    show([() => refuse('unexpected', 500), () => answer(why)]);
    expect(screen.getByRole('status').textContent).toContain('Reading the parts');
    expect((await screen.findByRole('alert')).textContent).toContain('r-9');
    await userEvent.click(screen.getByRole('button', { name: 'Try again' }));
    await screen.findByRole('table');
  });

  it('say that nothing is forecast yet', async () => {
    show([() => refuse('no-forecast', 409)]);
    await screen.findByText('No forecast yet');
    expect(screen.getByText('Try it later.')).toBeTruthy();
    expect(screen.queryByRole('alert')).toBeNull();
  });
});
