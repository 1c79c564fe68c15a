import { expect, test } from '../tests/setup/e2e.ts';
import {
  acceptRows,
  bringIn,
  cell,
  chooseCategory,
  figureOf,
  forecastCategory,
  goTo,
  saveChanges,
  seedFile,
  signIn,
  submitLine,
  typeInto,
} from './steps.ts';

test('a planner is told plainly that the password is wrong', async ({ page, demo }) => {
  await page.goto(`${demo.address}/sign-in`);
  await page.getByLabel('E-mail').fill('ilse@ostrel.example');
  await page.getByLabel('Password').fill('certainly not this one');
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByRole('alert')).toContainText('isn’t right');
});

test('a planner brings in the week, forecasts, overrides and submits', async ({ page, demo }) => {
  await signIn(page, demo, 'Ilse Brandt');
  await chooseCategory(page, 'Pantry');

  await test.step('semicolons and decimal commas are understood', async () => {
    await bringIn(page, seedFile('pantry-sales-2026-W48.csv'));
    await expect(page.getByLabel('Decimal mark')).toHaveValue(/,|comma/);
    await acceptRows(page);
  });

  await test.step('the forecast starts after the new week', async () => {
    await goTo(page, 'Plan');
    await expect(page.getByText('estimates from sales to 2026-W47')).toBeVisible();
    await forecastCategory(page, 'Pantry');
    await expect(page.getByText('estimates from sales to 2026-W48')).toBeVisible();
    await expect(page.getByText(/planned 2026-W49 to/)).toBeVisible();
    await page.getByRole('link', { name: 'Open the plan of Pasta' }).click();
    await expect(page.getByRole('heading', { name: 'Pasta', level: 1 })).toBeVisible();
  });

  const target = cell(page, 'Spaghetti 500 g', 'week 50');
  const total = cell(page, 'Line total', 'week 50');
  await test.step('a typed number moves the total at once, and undo takes it back', async () => {
    const before = await figureOf(target);
    const totalBefore = await figureOf(total);
    await typeInto(page, target, String(before + 120));
    await expect.poll(() => figureOf(total)).toBe(totalBefore + 120);
    await page.getByRole('button', { name: 'Undo' }).click();
    await expect.poll(() => figureOf(target)).toBe(before);
    await page.getByRole('button', { name: 'Redo' }).click();
    await expect.poll(() => figureOf(target)).toBe(before + 120);
    await saveChanges(page, 'Display agreed', 'Second placement in four stores.');
    await expect(page.getByText(/^Version 3, saved today|^Version 2, saved today/)).toBeVisible();
    await page.reload();
    await expect.poll(() => figureOf(target)).toBe(before + 120);
    await expect(target).toHaveAttribute('aria-label', /overridden/);
  });

  await test.step('a selection is scaled from the bar below', async () => {
    const first = cell(page, 'Penne 500 g', 'week 51');
    const before = await figureOf(first);
    await first.click();
    await page.keyboard.press('Shift+ArrowRight');
    const bar = page.getByRole('region', { name: 'Selection' });
    await expect(bar).toContainText('2 cells');
    await bar.getByText('scale by').click();
    await bar.getByRole('textbox').fill('1.1');
    await bar.getByRole('button', { name: 'Apply' }).click();
    await expect.poll(async () => Math.abs((await figureOf(first)) - before * 1.1)).toBeLessThanOrEqual(1);
    await saveChanges(page, 'Weather');
  });

  await test.step('history can’t be typed over', async () => {
    await typeInto(page, cell(page, 'Spaghetti 500 g', 'week 48'), '1');
    await expect(page.getByText('History can’t be typed over')).toBeVisible();
  });

  await test.step('versions are listed and can be read', async () => {
    await page.getByRole('button', { name: 'Versions' }).click();
    await expect(page.getByText('new forecast').first()).toBeVisible();
    await page.keyboard.press('Escape');
  });

  await submitLine(page, 'Spaghetti and penne raised for the display.');
  await typeInto(page, target, '9');
  await expect(page.getByText('The line is submitted.').first()).toBeVisible();
});

test('rows that can’t be taken come back with the reason', async ({ page, demo }) => {
  await signIn(page, demo, 'Ilse Brandt');
  await chooseCategory(page, 'Hot drinks');
  await bringIn(page, seedFile('hot-drinks-sales-with-faults.xlsx'));
  await expect(page.getByText('last week').first()).toBeVisible();
  await expect(page.getByRole('link', { name: /refused|left out/i }).first()).toBeVisible();
  await page.getByRole('button', { name: 'Drop the file' }).click();
});

test('a file that is no spreadsheet is refused with a sentence that says what to do', async ({ page, demo }) => {
  await signIn(page, demo, 'Ilse Brandt');
  await goTo(page, 'Sales');
  await page
    .locator('input[type=file]')
    .setInputFiles({ name: 'picture.xlsx', mimeType: 'image/png', buffer: Buffer.from('89504e470d0a1a0a', 'hex') });
  await page.waitForURL(/\/sales\/imports\/\d+/);
  await expect(page.getByText(/save it|Save it|export|open it/i).first()).toBeVisible({ timeout: 30_000 });
});
