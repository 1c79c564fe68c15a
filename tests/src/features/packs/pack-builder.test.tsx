import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { MemoryRouter } from 'react-router-dom';
import { beforeAll, describe, expect, it, vi } from 'vitest';
import { startTexts } from '../../../../src/app/i18n.ts';
import { PackBuilder } from '../../../../src/features/packs/components/PackBuilder.tsx';
import { shortChecksum } from '../../../../src/features/packs/components/PackTable.tsx';

beforeAll(() => startTexts());

const line = (id: number, name: string, locked: [string, string] | null) => ({
  id,
  name,
  lockedVersion: locked === null ? null : id + 10,
  firstLockedWeek: locked?.[0] ?? null,
  lastLockedWeek: locked?.[1] ?? null,
  lockedBy: locked === null ? null : 'Tomas Velde',
  lockedAt: locked === null ? null : '2026-11-27T10:00:00Z',
});

const offer = {
  categoryId: 1,
  firstWeek: '2026-11-30',
  lastWeek: '2026-12-28',
  lines: [
    line(1, 'Tea', ['2026-11-30', '2026-12-28']),
    line(2, 'Cocoa', ['2026-12-21', '2026-12-28']),
    line(3, 'Coffee', null),
  ],
};

function show(change: Partial<Parameters<typeof PackBuilder>[0]> = {}) {
  const onBuild = vi.fn();
  render(
    <MemoryRouter>
      <PackBuilder categoryId={1} offer={offer} isBusy={false} error={null} onBuild={onBuild} {...change} />
    </MemoryRouter>,
  );
  return onBuild;
}

describe('the next pack', () => {
  it('takes every line that is locked in the weeks, and never one that isn’t', async () => {
    const onBuild = show();
    expect(screen.getByRole('checkbox', { name: 'Put Coffee in' })).toBeDisabled();
    await userEvent.click(screen.getByRole('button', { name: 'Build with 2 lines' }));
    expect(onBuild).toHaveBeenCalledWith({
      categoryId: 1,
      firstWeek: '2026-11-30',
      lastWeek: '2026-12-28',
      lineIds: [1, 2],
    });
  });

  it('leaves out a line without a locked week in the weeks chosen, and says so', async () => {
    const onBuild = show();
    await userEvent.selectOptions(screen.getByLabelText('To week'), '2026-12-07');
    expect(screen.getByText('no locked week in this range')).toBeTruthy();
    await userEvent.click(screen.getByRole('button', { name: 'Build with 1 line' }));
    expect(onBuild).toHaveBeenCalledWith(expect.objectContaining({ lastWeek: '2026-12-07', lineIds: [1] }));
  });

  it('can’t be built without a line, nor with its weeks turned round', async () => {
    show();
    await userEvent.click(screen.getByRole('checkbox', { name: 'Put Tea in' }));
    await userEvent.click(screen.getByRole('checkbox', { name: 'Put Cocoa in' }));
    expect(screen.getByRole('button', { name: 'Build with 0 lines' })).toBeDisabled();
    await userEvent.selectOptions(screen.getByLabelText('From week'), '2026-12-28');
    await userEvent.selectOptions(screen.getByLabelText('To week'), '2026-11-30');
    expect(screen.getByLabelText('To week')).toHaveAccessibleDescription('The last week lies before the first one.');
  });

  it('leads to the plan where nothing is locked', () => {
    show({ offer: { ...offer, firstWeek: null, lastWeek: null, lines: [line(3, 'Coffee', null)] } });
    expect(screen.getByRole('link', { name: 'To the plan' }).getAttribute('href')).toBe('/plan?category=1');
    expect(screen.queryByRole('button')).toBeNull();
  });
});

it('shortens a checksum to what can be compared by eye', () => {
  expect(shortChecksum('9c41e07ba2d8513f00112233')).toBe('9c41 e07b a2d8 513f');
});
