import { join } from 'node:path';
import ExcelJS from 'exceljs';
import { expect, test } from '../tests/setup/e2e.ts';
import { acceptRows, bringIn, download, forecastCategory, goTo, lockLine, signOut, submitLine } from './steps.ts';

const sales = join(import.meta.dirname, '../tests/reference/oj/benchmark/oj_store10.csv');
const password = 'a long enough sentence';

test('an empty installation is set up through the page and brings its own sales to a locked plan and its pack', async ({
  page,
  emptyInstallation,
}) => {
  test.setTimeout(420_000);
  const { address, firstAdministratorLink } = emptyInstallation;

  await test.step('the first administrator opens the link and makes a category', async () => {
    await page.goto(firstAdministratorLink ?? '');
    await page.getByLabel('Your name').fill('Ada Quill');
    await page.getByLabel('E-mail').fill('ada@own.example');
    await page.getByLabel('Password', { exact: true }).fill(password);
    await page.getByRole('button', { name: 'Begin' }).click();
    await expect(page.getByRole('navigation', { name: 'Places' })).toBeVisible();
    await page.goto(`${address}/settings/range`);
    await page.getByLabel('Name of the category').fill('Juice');
    await page.getByRole('button', { name: 'Add', exact: true }).first().click();
    await expect(page.getByText('Juice is added.')).toBeVisible();
  });

  const link = await test.step('one person gets the roles of planner, category lead and finance', async () => {
    await page.goto(`${address}/settings/people`);
    await page.getByRole('button', { name: 'Invite a person' }).click();
    const dialog = page.getByRole('dialog');
    await dialog
      .getByLabel('Person', { exact: true })
      .or(dialog.getByLabel('Name', { exact: true }))
      .fill('Nele Ruiz');
    await dialog.getByLabel('E-mail').fill('nele@own.example');
    await dialog.getByRole('combobox', { name: 'Role 1' }).selectOption({ label: 'planner' });
    await dialog.getByRole('combobox', { name: 'for 1' }).selectOption({ label: 'Juice' });
    await dialog.getByRole('button', { name: 'Add a role' }).click();
    await dialog.getByRole('combobox', { name: 'Role 2' }).selectOption({ label: 'category lead' });
    await dialog.getByRole('combobox', { name: 'for 2' }).selectOption({ label: 'Juice' });
    await dialog.getByRole('button', { name: 'Add a role' }).click();
    await dialog.getByRole('combobox', { name: 'Role 3' }).selectOption({ label: 'finance' });
    await dialog.getByRole('button', { name: 'Make the link' }).click();
    return page.getByLabel('One-time link').inputValue();
  });
  await page.getByRole('button', { name: 'Done' }).click();
  await signOut(page);

  await test.step('that person joins by the link and brings in the sales', async () => {
    await page.goto(link);
    await page.getByLabel('Password', { exact: true }).fill(password);
    await page.getByRole('button', { name: 'Begin' }).click();
    await bringIn(page, sales);
    await expect(page.getByLabel('Category of all rows')).toHaveValue(/\d+/);
    await page.getByLabel('Yes, make them').check({ timeout: 60_000 });
    await acceptRows(page);
  });

  await test.step('the line is forecast, submitted and locked', async () => {
    await goTo(page, 'Plan');
    await forecastCategory(page, 'Juice');
    await page.getByRole('link', { name: 'Open the plan of OJ' }).click();
    await submitLine(page, 'As modelled.');
    await lockLine(page);
  });

  const pack = await test.step('and packed', async () => {
    await goTo(page, 'Packs');
    await page.getByRole('button', { name: 'Build with 1 line' }).click();
    const made = page.getByRole('link', { name: /Download/ }).first();
    await expect(made).toBeVisible({ timeout: 60_000 });
    return download(page, made);
  });
  const workbook = new ExcelJS.Workbook();
  await workbook.xlsx.load(pack.bytes as unknown as ExcelJS.Buffer);
  expect(workbook.worksheets.map(({ name }) => name)).toEqual(['Cover', 'Summary', 'OJ', 'Overrides', 'Assumptions']);
  expect(pack.name).toMatch(/^fairweek-pack-juice-1992W/);
});
