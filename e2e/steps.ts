import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Locator, Page } from '@playwright/test';
import { expect } from '../tests/setup/e2e.ts';
import type { InstallationFacts } from '../tests/setup/installation.ts';

/** What people do on several journeys, in their words. */

export async function signIn(page: Page, installation: InstallationFacts, name: string): Promise<void> {
  const person = installation.signIns.find((candidate) => candidate.name === name);
  if (!person) throw new Error(`nobody is called ${name}`);
  await signInWith(page, installation, person.email, person.password);
}

export async function signInWith(
  page: Page,
  { address }: InstallationFacts,
  email: string,
  password: string,
): Promise<void> {
  await page.goto(`${address}/sign-in`);
  await page.getByLabel('E-mail').fill(email);
  await page.getByLabel('Password').fill(password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByRole('navigation', { name: 'Places' })).toBeVisible();
}

export async function signOut(page: Page): Promise<void> {
  await page.getByRole('button', { name: /^You: / }).click();
  await page.getByRole('menuitem', { name: 'Sign out' }).click();
  await expect(page.getByRole('button', { name: 'Sign in' })).toBeVisible();
}

/** Moves to a place of the top bar. */
export async function goTo(page: Page, place: string): Promise<void> {
  await page.getByRole('navigation', { name: 'Places' }).getByRole('link', { name: place }).click();
}

export async function chooseCategory(page: Page, name: string): Promise<void> {
  await page.getByRole('button', { name: /^Category in view/ }).click();
  await page.getByRole('menuitemradio', { name }).or(page.getByRole('menuitem', { name })).click();
  await expect(page.getByRole('button', { name: `Category in view: ${name}` })).toBeVisible();
}

/** Puts a file into the drop area and waits until it was read. */
export async function bringIn(page: Page, filePath: string): Promise<void> {
  await goTo(page, 'Sales');
  await page.locator('input[type=file]').setInputFiles(filePath);
  await page.waitForURL(/\/sales\/imports\/\d+/);
  await expect(page.getByRole('heading', { name: 'The file as Fairweek reads it' })).toBeVisible({ timeout: 60_000 });
}

/** Accepts what the preview shows and waits until it is in force. */
export async function acceptRows(page: Page): Promise<void> {
  await page.getByRole('button', { name: /^Accept [\d,.]+ rows?$/ }).click();
  await expect(page.getByRole('button', { name: 'Withdraw' })).toBeVisible({ timeout: 90_000 });
}

/** Forecasts the category in view from its plan page and waits for the end. */
export async function forecastCategory(page: Page, name: string): Promise<void> {
  await page
    .getByRole('button', { name: new RegExp(`^Forecast (${name}|again)`) })
    .first()
    .click();
  await expect(page.getByRole('progressbar')).toBeVisible();
  await expect(page.getByRole('progressbar')).toHaveCount(0, { timeout: 150_000 });
}

export function cell(page: Page, row: string, week: string): Locator {
  return page.getByRole('gridcell', { name: new RegExp(`^${escape(row)}, ${week}`) });
}

function escape(text: string): string {
  return text.replace(/[.*+?^${}()|[\]\\]/g, '\\$&');
}

/** The number of a grid cell, from what a screen reader says of it. */
export async function figureOf(target: Locator): Promise<number> {
  const label = (await target.getAttribute('aria-label')) ?? '';
  const figure = /(?:plan|sold) ([\d,.\u00a0\u202f]+)/.exec(label)?.[1];
  if (figure === undefined) throw new Error(`no figure in “${label}”`);
  return Number(figure.replace(/[^\d]/g, ''));
}

/** Types a number into a cell as one does in a spreadsheet. */
export async function typeInto(page: Page, target: Locator, text: string): Promise<void> {
  await target.click();
  await page.keyboard.type(text);
  await page.keyboard.press('Enter');
}

export async function saveChanges(page: Page, reason: string, note?: string): Promise<void> {
  await page
    .getByRole('button', { name: /^Save \d+ changes?$/ })
    .first()
    .click();
  const dialog = page.getByRole('dialog');
  await dialog.getByLabel('Reason').selectOption({ label: reason });
  if (note !== undefined) await dialog.getByLabel(/^Note/).fill(note);
  await dialog.getByRole('button', { name: /^Save \d+ changes?$/ }).click();
  await expect(dialog).toHaveCount(0);
}

export async function submitLine(page: Page, comment: string): Promise<void> {
  await page.getByRole('button', { name: 'Submit line' }).click();
  const dialog = page.getByRole('dialog');
  await dialog.getByLabel('Comment for the category lead').fill(comment);
  await dialog.getByRole('button', { name: 'Submit', exact: true }).click();
  await expect(page.getByText(/^Submitted|Submitted today/).first()).toBeVisible();
}

export async function lockLine(page: Page): Promise<void> {
  await page.getByRole('button', { name: 'Lock weeks' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Lock', exact: true }).click();
  await expect(page.getByRole('button', { name: 'Unlock weeks' })).toBeVisible();
}

/** Downloads through a link or button and returns the bytes. */
export async function download(page: Page, target: Locator): Promise<{ name: string; bytes: Buffer }> {
  const [file] = await Promise.all([page.waitForEvent('download'), target.click()]);
  return { name: file.suggestedFilename(), bytes: readFileSync(await file.path()) };
}

export const seedFile = (name: string): string => join(import.meta.dirname, '../seed-data', name);
