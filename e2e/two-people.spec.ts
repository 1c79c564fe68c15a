import type { Locator, Page } from '@playwright/test';
import { expect, test } from '../tests/setup/e2e.ts';
import { figureOf, saveChanges, signIn, typeInto } from './steps.ts';

/** Planned cells of one week, from the top row down. */
const planned = (page: Page, week: string): Locator =>
  page.getByRole('gridcell', { name: new RegExp(`, week ${week} of \\d+, plan`) });

async function openPreserves(page: Page, address: string): Promise<void> {
  await page.goto(`${address}/plan`);
  await page.getByRole('button', { name: /^Category in view/ }).click();
  await page.getByRole('menuitemradio', { name: 'Pantry' }).click();
  await page.getByRole('link', { name: 'Open the plan of Preserves' }).click();
  await expect(page.getByRole('heading', { name: 'Preserves', level: 1 })).toBeVisible();
  await expect(planned(page, '52').first()).toBeVisible();
}

test('two people keep what they change in different cells, and choose where it is the same one', async ({
  browser,
  demo,
}) => {
  const planner = await (await browser.newContext()).newPage();
  const lead = await (await browser.newContext()).newPage();
  await signIn(planner, demo, 'Ilse Brandt');
  await signIn(lead, demo, 'Tomas Velde');
  await openPreserves(planner, demo.address);
  await openPreserves(lead, demo.address);

  const contested = planned(planner, '52').first();
  const own = planned(planner, '53').nth(1);
  const before = await figureOf(contested);
  const ownBefore = await figureOf(own);
  await typeInto(planner, contested, String(before + 40));
  await typeInto(planner, own, String(ownBefore + 7));

  const leadsOwn = planned(lead, '52').nth(2);
  const leadsBefore = await figureOf(leadsOwn);
  await typeInto(lead, planned(lead, '52').first(), String(before + 11));
  await typeInto(lead, leadsOwn, String(leadsBefore + 3));
  await saveChanges(lead, 'Supplier short', 'One lorry less.');

  await planner.getByRole('button', { name: 'Save 2 changes' }).click();
  const dialog = planner.getByRole('dialog');
  await dialog.getByLabel('Reason').selectOption({ label: 'Display agreed' });
  await dialog.getByLabel(/^Note/).fill('Twelve stores.');
  await dialog.getByRole('button', { name: 'Save 2 changes' }).click();
  await expect(dialog.getByRole('heading', { name: 'Two values for one cell' })).toBeVisible();
  await expect(dialog).toContainText('Tomas Velde');
  await expect(dialog).toContainText('One lorry less.');
  await expect(dialog).toContainText('Twelve stores.');
  await dialog.getByRole('radio', { name: 'Keep Tomas Velde’s' }).check();
  await dialog.getByRole('button', { name: /^Save with/ }).click();
  await expect(dialog).toHaveCount(0);

  await expect.poll(() => figureOf(contested)).toBe(before + 11);
  await expect.poll(() => figureOf(own)).toBe(ownBefore + 7);
  await expect.poll(() => figureOf(planned(planner, '52').nth(2))).toBe(leadsBefore + 3);
  // The other page learns of it without being loaded again.
  await expect.poll(() => figureOf(planned(lead, '53').nth(1)), { timeout: 30_000 }).toBe(ownBefore + 7);
});

test('by keyboard alone: copy, paste, scale, take back, bring back, save, clear', async ({ page, demo, context }) => {
  await context.grantPermissions(['clipboard-read', 'clipboard-write']);
  await signIn(page, demo, 'Ilse Brandt');
  await openPreserves(page, demo.address);
  const corner = planned(page, '52').first();
  const below = planned(page, '52').nth(1);
  const right = planned(page, '53').first();
  const total = page.getByRole('gridcell', { name: /^Line total, week 52/ });
  const before = await figureOf(total);
  const belowBefore = await figureOf(below);
  const cornerBefore = await figureOf(corner);
  await page.evaluate(() => navigator.clipboard.writeText('1,500\t1,600\n1,700\t1,800\n'));

  await test.step('a paste that can be read two ways is shown first', async () => {
    await corner.focus();
    await page.keyboard.press('Control+v');
    const dialog = page.getByRole('dialog');
    await expect(dialog).toContainText('1,500');
    await dialog.getByRole('button', { name: 'Paste these' }).press('Enter');
    await expect.poll(() => figureOf(corner)).toBe(1500);
    await expect.poll(() => figureOf(right)).toBe(1600);
    expect(await figureOf(total)).toBe(before - cornerBefore - belowBefore + 1500 + 1700);
  });

  await test.step('one step takes the whole paste back, and brings it again', async () => {
    await corner.focus();
    await page.keyboard.press('Control+z');
    await expect.poll(() => figureOf(corner)).toBe(cornerBefore);
    expect(await figureOf(total)).toBe(before);
    await page.keyboard.press('Control+Shift+Z');
    await expect.poll(() => figureOf(corner)).toBe(1500);
  });

  await test.step('what is copied comes back as figures for a spreadsheet', async () => {
    await corner.focus();
    await page.keyboard.press('ArrowRight');
    await page.keyboard.press('ArrowLeft');
    await page.keyboard.press('Shift+ArrowRight');
    await page.keyboard.press('Shift+ArrowDown');
    await page.keyboard.press('Control+c');
    expect(await page.evaluate(() => navigator.clipboard.readText())).toBe('1500\t1600\r\n1700\t1800');
  });

  await test.step('saved from the keyboard, there after a reload, and cleared again', async () => {
    await page.keyboard.press('Control+s');
    const dialog = page.getByRole('dialog');
    await dialog.getByLabel('Reason').selectOption({ label: 'Local event' });
    await dialog.getByLabel(/^Note/).fill('Fair in the town.');
    await dialog.getByRole('button', { name: 'Save 4 changes' }).press('Enter');
    await expect(dialog).toHaveCount(0);
    await page.reload();
    await expect(corner).toHaveAttribute('aria-label', /plan 1,500, overridden/);
    await corner.focus();
    await page.keyboard.press('Delete');
    await expect(corner).not.toHaveAttribute('aria-label', /overridden/);
    await page.keyboard.press('Escape');
    await page.keyboard.press('Tab');
    await expect(page.getByRole('grid').locator(':focus')).toHaveCount(0);
    await page.getByRole('button', { name: 'Discard' }).click();
    await expect(corner).toHaveAttribute('aria-label', /plan 1,500, overridden/);
  });
});
