import ExcelJS from 'exceljs';
import { expect, test } from '../tests/setup/e2e.ts';
import {
  acceptRows,
  bringIn,
  cell,
  chooseCategory,
  download,
  figureOf,
  forecastCategory,
  goTo,
  lockLine,
  saveChanges,
  seedFile,
  signIn,
  submitLine,
  typeInto,
} from './steps.ts';

test('planner, category lead and finance bring a week from the spreadsheet to the pack', async ({ browser, demo }) => {
  test.setTimeout(300_000);
  const planner = await (await browser.newContext()).newPage();
  const lead = await (await browser.newContext()).newPage();
  const finance = await (await browser.newContext()).newPage();
  await signIn(planner, demo, 'Rowan Achter');
  await signIn(lead, demo, 'Tomas Velde');
  await signIn(finance, demo, 'Judith Amsel');

  await bringIn(planner, seedFile('refreshments-sales-2026-W48.xlsx'));
  await acceptRows(planner);
  await bringIn(planner, seedFile('refreshments-calendar-from-2026-W49.xlsx'));
  await acceptRows(planner);
  await goTo(planner, 'Plan');
  await forecastCategory(planner, 'Refreshments');
  await planner.getByRole('link', { name: 'Open the plan of Fruit juice' }).click();
  const planned = cell(planner, 'Apple juice cloudy 1 l', 'week 51');
  const before = await figureOf(planned);
  await typeInto(planner, planned, String(before + 90));
  await saveChanges(planner, 'Local event', 'Harvest fair in Brenholm.');
  await submitLine(planner, 'Harvest fair added.');

  await chooseCategory(lead, 'Refreshments');
  await goTo(lead, 'Waiting');
  await lead
    .getByRole('link', { name: /Review|Open/ })
    .first()
    .waitFor();
  await lead.goto(planner.url());
  const seen = cell(lead, 'Apple juice cloudy 1 l', 'week 51');
  await expect.poll(() => figureOf(seen)).toBe(before + 90);
  await typeInto(lead, seen, String(before + 60));
  await saveChanges(lead, 'Supplier short', 'Only sixty more can be delivered.');
  const lockedTotal = await figureOf(cell(lead, 'Line total', 'week 51'));
  await lockLine(lead);

  await chooseCategory(finance, 'Refreshments');
  await goTo(finance, 'Packs');
  await expect(finance.getByLabel('Fruit juice')).toBeChecked();
  await finance.getByRole('button', { name: 'Build with 1 line' }).click();
  const link = finance.getByRole('link', { name: /Download/ }).first();
  await expect(link).toBeVisible({ timeout: 60_000 });
  const pack = await download(finance, link);
  const workbook = new ExcelJS.Workbook();
  await workbook.xlsx.load(pack.bytes as unknown as ExcelJS.Buffer);
  const figures: number[] = [];
  workbook.getWorksheet('Fruit juice')?.eachRow((row) => {
    row.eachCell((one) => {
      const { value } = one;
      const figure = typeof value === 'object' && value !== null && 'result' in value ? value.result : value;
      if (typeof figure === 'number') figures.push(figure);
    });
  });
  expect(figures).toContain(before + 60);
  expect(figures).toContain(lockedTotal);
  await expect(planner.getByText(/locked in version|is locked/).first()).toBeVisible({ timeout: 30_000 });
});
