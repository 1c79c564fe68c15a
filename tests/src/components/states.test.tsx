import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { MemoryRouter } from 'react-router-dom';
import { beforeAll, describe, expect, it, vi } from 'vitest';
import type { Job } from '../../../shared/contracts/jobs.ts';
import { startTexts } from '../../../src/app/i18n.ts';
import { Dialog } from '../../../src/components/Dialog.tsx';
import { TextField } from '../../../src/components/fields.tsx';
import { JobProgress } from '../../../src/components/ProgressBar.tsx';
import { EmptyState, ErrorState, ProblemNote, QueryStates } from '../../../src/components/states.tsx';
import { StateRoute } from '../../../src/components/StateRoute.tsx';
import { ToastRegion } from '../../../src/components/ToastRegion.tsx';
import { showToast } from '../../../src/components/toasts.ts';
import { ProblemError } from '../../../src/lib/api.ts';

beforeAll(() => startTexts());

const refusal = (status: number) =>
  new ProblemError({ type: 'not-allowed', title: 'Not allowed', status, detail: 'Ask the lead.', instance: 'r-7' });

describe('a query', () => {
  const refetch = vi.fn();

  it('shows that it is asked for, then its answer', () => {
    const { rerender } = render(
      <QueryStates<string> query={{ data: undefined, error: null, refetch }} loading="Fetching…">
        {(value) => <p>{value}</p>}
      </QueryStates>,
    );
    expect(screen.getByRole('status').textContent).toContain('Fetching…');
    rerender(<QueryStates query={{ data: 'here', error: null, refetch }}>{(value) => <p>{value}</p>}</QueryStates>);
    expect(screen.getByText('here')).toBeTruthy();
  });

  it('that may not be seen says so and offers no second try', () => {
    render(<QueryStates query={{ data: undefined, error: refusal(403), refetch }}>{() => null}</QueryStates>);
    expect(screen.getByRole('alert').textContent).toContain('Ask the lead.');
    expect(screen.queryByRole('button')).toBeNull();
  });

  it('that failed names the request and is asked again at a press', async () => {
    render(
      <QueryStates isPage query={{ data: undefined, error: refusal(500), refetch }}>
        {() => null}
      </QueryStates>,
    );
    expect(screen.getByRole('heading', { level: 1, name: 'Not allowed' })).toBeTruthy();
    expect(screen.getByRole('alert').textContent).toContain('r-7');
    await userEvent.click(screen.getByRole('button', { name: 'Try again' }));
    expect(refetch).toHaveBeenCalledOnce();
  });

  it('keeps an answer once shown when asking again fails', () => {
    render(
      <QueryStates query={{ data: 'old', error: refusal(500), refetch }}>{(value) => <p>{value}</p>}</QueryStates>,
    );
    expect(screen.getByText('old')).toBeTruthy();
  });
});

describe('background work', () => {
  const job: Job = {
    id: 1,
    kind: 'import.accept',
    state: 'running',
    progress: 0.42,
    message: { key: 'mergingRows', values: { rows: 1204 } },
    result: null,
    problem: null,
    startedAt: null,
    endedAt: null,
  };

  it('says its stage and how far it is', () => {
    render(<JobProgress job={job} />);
    expect(screen.getByRole('progressbar', { name: 'Taking the rows in' }).getAttribute('aria-valuenow')).toBe('42');
    expect(screen.getByRole('status').textContent).toContain('Putting 1,204 rows in force');
  });

  it('that failed says why', () => {
    render(<JobProgress job={{ ...job, state: 'failed', problem: { type: 'x', detail: 'The file is gone.' } }} />);
    expect(screen.getByRole('alert').textContent).toContain('The file is gone.');
  });
});

describe('a field', () => {
  it('ties its hint and its error to the control', () => {
    render(<TextField label="Name" hint="Stands beside numbers." error="A name is needed." />);
    const input = screen.getByLabelText('Name');
    expect(input).toHaveAccessibleDescription('Stands beside numbers. A name is needed.');
    expect(input).toBeInvalid();
  });
});

describe('a dialog', () => {
  it('carries its title as its name and closes by its button', async () => {
    const close = vi.fn();
    render(<Dialog open onClose={close} title="Withdraw?" lead="It stays listed." />);
    expect(screen.getByRole('dialog', { name: 'Withdraw?' })).toHaveAccessibleDescription('It stays listed.');
    await userEvent.click(screen.getByRole('button', { name: 'Close' }));
    expect(close).toHaveBeenCalledOnce();
  });

  it('that is not open is not there', () => {
    render(<Dialog open={false} onClose={() => undefined} title="Withdraw?" />);
    expect(screen.queryByRole('dialog')).toBeNull();
  });
});

it('the route of a line marks where it stands', () => {
  render(<StateRoute state="submitted" />);
  const steps = screen.getAllByRole('listitem');
  expect(steps.map((step) => step.getAttribute('aria-current'))).toEqual([null, 'step', null]);
});

it('a toast about a problem stays until it is closed', async () => {
  render(<ToastRegion />);
  showToast({ tone: 'problem', text: 'The link is spent.' });
  expect(await screen.findByText('The link is spent.')).toBeTruthy();
  await userEvent.click(screen.getByRole('button', { name: 'Close' }));
  expect(screen.queryByText('The link is spent.')).toBeNull();
});

it('a problem beside a button lists what was wrong with each part', () => {
  const error = new ProblemError({
    type: 'invalid-request',
    title: 'Some of what was sent can’t be used',
    status: 422,
    detail: 'Look at the fields.',
    errors: [{ pointer: '/name', detail: 'must not be empty' }],
  });
  render(<ProblemNote error={error} />);
  expect(screen.getByRole('alert').textContent).toContain('must not be empty');
});

it('an empty or failed part of a page adds no heading out of order', () => {
  render(
    <MemoryRouter>
      <EmptyState title="No pack yet" />
      <ErrorState error={refusal(500)} />
    </MemoryRouter>,
  );
  expect(screen.queryAllByRole('heading')).toEqual([]);
});
