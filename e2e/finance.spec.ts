import { createHash } from 'node:crypto';
import ExcelJS from 'exceljs';
import { expect, test } from '../tests/setup/e2e.ts';
import { chooseCategory, download, goTo, signIn } from './steps.ts';

test('finance downloads the pack twice, byte for byte the same, and may change no number', async ({ page, demo }) => {
  await signIn(page, demo, 'Judith Amsel');
  await chooseCategory(page, 'Hot drinks');
  await goTo(page, 'Packs');
  const first = await download(page, page.getByRole('link', { name: /Download/ }).first());
  const second = await download(page, page.getByRole('link', { name: /Download/ }).first());
  expect(first.name).toMatch(/^fairweek-pack-hot-drinks-.*\.xlsx$/);
  expect(createHash('sha256').update(first.bytes).digest('hex')).toBe(
    createHash('sha256').update(second.bytes).digest('hex'),
  );

  const workbook = new ExcelJS.Workbook();
  await workbook.xlsx.load(first.bytes as unknown as ExcelJS.Buffer);
  expect(workbook.worksheets.map(({ name }) => name)).toEqual(['Cover', 'Summary', 'Tea', 'Overrides', 'Assumptions']);

  await page.goto(`${demo.address}/plan`);
  await page.getByRole('link', { name: 'Open the plan of Tea' }).click();
  await expect(page.getByRole('heading', { name: 'Tea', level: 1 })).toBeVisible();
  for (const action of ['Submit line', 'Lock weeks', 'Unlock weeks', 'Return']) {
    await expect(page.getByRole('button', { name: action, exact: true })).toHaveCount(0);
  }
});

test('a viewer looks at the own category and is shown nothing to change', async ({ page, demo }) => {
  await signIn(page, demo, 'Pia Lund');
  await page.goto(`${demo.address}/plan`);
  await expect(page.getByRole('link', { name: 'Open the plan of Tea' })).toBeVisible();
  await expect(page.getByRole('button', { name: /^Forecast/ })).toHaveCount(0);
  await goTo(page, 'Sales');
  await expect(page.getByRole('button', { name: 'Choose a file' })).toHaveCount(0);
  await page.goto(`${demo.address}/settings/people`);
  await expect(page.getByText(/administrator/i).first()).toBeVisible();
  await expect(page.getByRole('button', { name: /invite/i })).toHaveCount(0);
});
