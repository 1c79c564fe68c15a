import { expect, test } from '../tests/setup/e2e.ts';
import { cell, chooseCategory, figureOf, lockLine, saveChanges, signIn, signOut, typeInto } from './steps.ts';

test('a category lead adjusts a submitted line, locks it, and unlocks it with a reason', async ({ page, demo }) => {
  await signIn(page, demo, 'Tomas Velde');
  await expect(page.getByText('Cocoa').first()).toBeVisible();
  await chooseCategory(page, 'Hot drinks');
  await page.goto(`${demo.address}/plan`);
  await page.getByRole('link', { name: 'Open the plan of Cocoa' }).click();
  await expect(page.getByText('Winter market in Alderwick').first()).toBeVisible();

  const target = cell(page, 'Baking cocoa 250 g', 'week 50');
  const before = await figureOf(target);
  await typeInto(page, target, String(before + 25));
  await saveChanges(page, 'Price decision', 'Baking week agreed with buying.');
  await expect.poll(() => figureOf(target)).toBe(before + 25);

  await lockLine(page);
  await expect(target).toHaveAttribute('aria-label', /locked/);
  await typeInto(page, target, '1');
  await expect(page.getByText(/is locked( in version|\. A category lead)/).last()).toBeVisible();
  expect(await figureOf(target)).toBe(before + 25);

  await page.getByRole('button', { name: 'Unlock weeks' }).click();
  const dialog = page.getByRole('dialog');
  await dialog.getByRole('button', { name: 'Unlock', exact: true }).click();
  await expect(dialog.getByText('Say why they are unlocked.')).toBeVisible();
  await dialog.getByLabel('Reason').fill('Supplier moved the delivery.');
  await dialog.getByRole('button', { name: 'Unlock', exact: true }).click();
  await expect(page.getByRole('button', { name: 'Unlock weeks' })).toHaveCount(0);
  await signOut(page);
});

test('a category lead finds nothing to lock in a draft, and returns a submitted line with a comment', async ({
  page,
  demo,
}) => {
  await signIn(page, demo, 'Tomas Velde');
  await chooseCategory(page, 'Hot drinks');
  await page.goto(`${demo.address}/plan`);
  await page.getByRole('link', { name: 'Open the plan of Ground coffee' }).click();
  await expect(page.getByRole('heading', { name: 'Ground coffee', level: 1 })).toBeVisible();
  await expect(page.getByRole('button', { name: 'Lock weeks' })).toHaveCount(0);
  await page.getByRole('button', { name: 'Submit line' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Submit', exact: true }).click();
  await page.getByRole('button', { name: 'Return', exact: true }).click();
  const dialog = page.getByRole('dialog');
  await dialog.getByLabel('What should change').fill('Look at the winter spice again.');
  await dialog.getByRole('button', { name: 'Return it' }).click();
  await expect(page.getByRole('button', { name: 'Submit line' })).toBeVisible();
  await expect(page.getByText('Look at the winter spice again.').first()).toBeVisible();
});
