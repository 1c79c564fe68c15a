import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { beforeAll, describe, expect, it } from 'vitest';
import type { DiagnosedEffect, FitDiagnosis, LineFitView } from '../../../../shared/contracts/lines.ts';
import { startTexts } from '../../../../src/app/i18n.ts';
import { EffectTable } from '../../../../src/features/lines/components/EffectTable.tsx';
import { ExpertDrawer } from '../../../../src/features/lines/components/ExpertDrawer.tsx';
import { RivalTable } from '../../../../src/features/lines/components/RivalTable.tsx';

beforeAll(() => startTexts());

const errors = { classical: 0.0575, hc1: 0.0658, hc3: 0.0662, week: 0.4367, neweyWest: 0.5121 };
const effectOf = (name: string, over: Partial<DiagnosedEffect> = {}): DiagnosedEffect => ({
  name,
  group: 'promotion',
  estimate: -2.5,
  errors,
  varianceInflation: 2.6,
  inseparableFrom: [],
  items: null,
  locations: null,
  ...over,
});
const diagnosis: FitDiagnosis = {
  rows: 312,
  series: 3,
  items: 3,
  weeks: 104,
  parameters: 9.4,
  residualDegrees: 302.6,
  rSquaredWithin: 0.78,
  adjustedRSquaredWithin: 0.77,
  rSquared: 0.92,
  adjustedRSquared: 0.91,
  likelihood: null,
  effects: [
    effectOf('price cut', {
      items: {
        own: 0.62,
        withOwnSlope: 3,
        members: 3,
        lowest: { name: '101', slope: -3 },
        highest: { name: '102', slope: -2 },
      },
    }),
    effectOf('feature', { inseparableFrom: ['display'], estimate: 0.4 }),
  ],
  neweyWestLag: 4,
  condition: [{ index: 41, shares: [{ name: 'feature', share: 0.9 }] }],
  durbinWatson: 1.2,
  breuschPagan: null,
  ljungBox: null,
  leverage: { threshold: 0.06, above: 17, largest: 0.4 },
  influential: [
    {
      item: '101',
      location: 'All',
      weekStart: '2025-03-03',
      residual: Math.log(0.5),
      leverage: 0.2,
      cooksDistance: 0.123,
    },
  ],
};
const coefficient = (name: string, estimate: number) => ({
  name,
  group: 'promotion',
  estimate,
  standardError: 0.05,
  low95: estimate - 0.1,
  high95: estimate + 0.1,
});
const fit: NonNullable<LineFitView['fit']> = {
  id: 1,
  at: '2026-01-01T10:00:00Z',
  salesTo: '2025-12-22',
  rows: 312,
  rank: 8,
  sigma: 0.2,
  rSquared: 0.7,
  aic: 10,
  seconds: 0,
  specification: { name: 'rival 8', averagedWith: ['rival 2'] },
  coefficients: [coefficient('price cut', -2.5), coefficient('feature', 0.4)],
  scores: Array.from({ length: 9 }, (_, k) => ({ specification: `rival ${k + 1}`, crps: 10 + k, wape: 0.2 })),
  findings: [],
  diagnosis,
};
const names = { items: { '101': 'Malted cocoa', '102': 'Baking cocoa' }, locations: {} };

/** With plain spaces, as one reads it. */
const wordsOf = (element: Element) => element.textContent.replace(/\s+/g, ' ');
const rowOf = (text: RegExp) => screen.getByRole('rowheader', { name: text }).closest('tr')!;

describe('effects in plain words', () => {
  it('say whose evidence an effect is and which items lie lowest and highest', () => {
    render(<EffectTable fit={fit} names={names} />);
    const row = rowOf(/20 % off sells 75\s% more/);
    expect(wordsOf(row)).toContain('62 % items’ own');
    expect(wordsOf(row)).toContain('38 % the line’s');
    expect(wordsOf(row)).toContain('from 56 % more (Baking cocoa) to 95 % more (Malted cocoa)');
  });

  it('name what an effect can’t be told apart from instead of a number', () => {
    render(<EffectTable fit={fit} names={names} />);
    const row = rowOf(/Being advertised/);
    expect(wordsOf(row)).toContain('can’t be told apart from “display”');
    expect(wordsOf(row)).not.toMatch(/\d %/);
  });

  it('stand in a table of figures too', async () => {
    render(<EffectTable fit={fit} names={names} />);
    await userEvent.click(screen.getByRole('button', { name: 'as a table' }));
    const row = rowOf(/A promotion of 20 % off/);
    expect(within(row).getByText(/^62\s%$/)).toBeTruthy();
    expect(wordsOf(row)).toContain('1.747');
  });
});

describe('the expert drawer', () => {
  it('is closed at first, then shows five errors, tests in words and influential weeks', async () => {
    render(<ExpertDrawer fit={fit} diagnosis={diagnosis} names={names} />);
    expect(screen.queryByText('0.4367')).toBeNull();
    const button = screen.getByRole('button', { name: /Show errors/ });
    expect(button.getAttribute('aria-expanded')).toBe('false');
    await userEvent.click(button);
    const row = rowOf(/^price cut$/);
    for (const figure of ['0.0575', '0.0658', '0.0662', '0.4367', '0.5121', '2.6']) {
      expect(within(row).getByText(figure)).toBeTruthy();
    }
    expect(screen.getByText(/tends to last/)).toBeTruthy();
    expect(screen.getByText(/can’t tell them apart/)).toBeTruthy();
    expect(screen.getByText(/17 of 312 item weeks/)).toBeTruthy();
    expect(rowOf(/Malted cocoa/).textContent).toContain('2025-W10');
    expect(screen.getByText(/there is no likelihood/)).toBeTruthy();
  });
});

describe('rival specifications', () => {
  it('are the best few with the chosen and the averaged ones, and all on demand', async () => {
    render(<RivalTable fit={fit} />);
    expect(screen.getAllByRole('rowheader')).toHaveLength(7);
    expect(rowOf(/rival 8/).textContent).toContain('chosen');
    expect(rowOf(/rival 2/).textContent).toContain('averaged in');
    expect(rowOf(/rival 2/).textContent).toContain('+10.0');
    await userEvent.click(screen.getByRole('button', { name: 'Show all 9 specifications' }));
    expect(screen.getAllByRole('rowheader')).toHaveLength(9);
  });
});
