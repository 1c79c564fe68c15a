import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { useState } from 'react';
import { beforeAll, describe, expect, it } from 'vitest';
import { startTexts } from '../../../src/app/i18n.ts';
import { Weekline, type WeekRange } from '../../../src/components/Weekline.tsx';

const weekline = {
  firstWeek: '2026-10-05',
  sold: [100, 120, null, 90],
  planned: [110, 130],
  promotedWeeks: ['2026-10-12'],
  lockedWeeks: ['2026-11-02'],
  holidays: [],
};

beforeAll(() => startTexts());

function Shown() {
  const [range, setRange] = useState<WeekRange>({ firstWeek: '2026-10-12', lastWeek: '2026-11-02' });
  return <Weekline weekline={weekline} title="Tea" range={range} onRangeChange={setRange} />;
}

describe('the weekline', () => {
  it('moves its handles by the keyboard and says the week it stands at', async () => {
    render(<Shown />);
    const first = screen.getByRole('slider', { name: 'First week shown' });
    first.focus();
    await userEvent.keyboard('{ArrowRight}');
    expect(first.getAttribute('aria-valuetext')).toBe('2026-W43');
    await userEvent.keyboard('{Home}');
    expect(first.getAttribute('aria-valuetext')).toBe('2026-W41');

    screen.getByRole('slider', { name: 'Last week shown' }).focus();
    await userEvent.keyboard('{End}');
    expect(
      screen.getByRole('region', { name: 'Weekline: Tea, 2026-W41 to 2026-W46, showing 2026-W41 to 2026-W46' }),
    ).toBeTruthy();
  });

  it('says in words what it draws', () => {
    render(<Shown />);
    expect(
      screen.getByText(
        'Weeks sold: 4, 310 units. Weeks planned: 2, 240 units. Weeks with a promotion: 1; locked: 1; holidays: 0.',
      ),
    ).toBeTruthy();
  });

  it('opens the same weeks as a table', async () => {
    render(<Shown />);
    await userEvent.click(screen.getByRole('button', { name: 'as a table' }));
    const table = screen.getByRole('table', { name: 'Tea, week by week' });
    const row = within(table).getByRole('row', { name: /2026-W45/ });
    expect(within(row).getByText('110')).toBeTruthy();
    expect(within(row).getByText('locked')).toBeTruthy();
    expect(within(table).getByText('not known')).toBeTruthy();
  });

  it('offers no handles where nothing can be moved', () => {
    render(<Weekline weekline={weekline} title="Tea" range={{ firstWeek: '2026-10-12', lastWeek: '2026-11-02' }} />);
    expect(screen.queryAllByRole('slider')).toEqual([]);
  });
});
