import { expect, test } from '../tests/setup/e2e.ts';
import { acceptRows, bringIn, chooseCategory, goTo, seedFile, signIn } from './steps.ts';

test('the workbooks of the demo company go in through the page, and a withdrawn week is gone again', async ({
  page,
  demo,
}) => {
  await signIn(page, demo, 'Ilse Brandt');
  await chooseCategory(page, 'Pantry');
  await bringIn(page, seedFile('pantry-calendar-from-2026-W49.xlsx'));
  await expect(page.getByLabel('The file holds')).toHaveValue('calendar');
  await acceptRows(page);

  await chooseCategory(page, 'Hot drinks');
  await bringIn(page, seedFile('hot-drinks-calendar-from-2026-W49.xlsx'));
  await acceptRows(page);
  await bringIn(page, seedFile('hot-drinks-sales-2026-W48.xlsx'));
  await expect(page.getByText('Its sales are taken in all the same')).toBeVisible();
  await acceptRows(page);
  await goTo(page, 'Sales');
  await expect(page.getByText('Sold to 2026-W48')).toBeVisible();

  await page.getByRole('button', { name: 'Withdraw hot-drinks-sales-2026-W48.xlsx' }).click();
  const dialog = page.getByRole('dialog');
  await dialog.getByRole('textbox').fill('A corrected file is coming.');
  await dialog.getByRole('button', { name: /withdraw/i }).click();
  await expect(page.getByText('Sold to 2026-W47')).toBeVisible({ timeout: 30_000 });
});
