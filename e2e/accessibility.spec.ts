import AxeBuilder from '@axe-core/playwright';
import { expect, test } from '../tests/setup/e2e.ts';
import { signIn } from './steps.ts';

const pages: readonly [person: string, path: string][] = [
  ['Tomas Velde', '/'],
  ['Tomas Velde', '/sales'],
  ['Tomas Velde', '/sales/imports/1'],
  ['Tomas Velde', '/calendar'],
  ['Tomas Velde', '/plan'],
  ['Tomas Velde', '/plan/3'],
  ['Tomas Velde', '/lines/3'],
  ['Tomas Velde', '/track-record'],
  ['Tomas Velde', '/packs'],
  ['Maren Holt', '/settings/general'],
  ['Maren Holt', '/settings/people'],
  ['Maren Holt', '/settings/range'],
];

// Rules: WCAG 2.0 to 2.2, levels A and AA, as axe-core checks them.
const rules = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];

for (const colorScheme of ['light', 'dark'] as const) {
  test(`every page passes the accessibility rules, ${colorScheme}`, async ({ page, demo }) => {
    await page.emulateMedia({ colorScheme });
    let signedIn = '';
    for (const [person, path] of pages) {
      if (signedIn !== person) {
        await page.context().clearCookies();
        await page.goto(`${demo.address}/sign-in`);
        await expect(page.getByRole('button', { name: 'Sign in' })).toBeVisible();
        const door = await new AxeBuilder({ page }).withTags(rules).analyze();
        expect(door.violations.map(({ id }) => `/sign-in ${id}`)).toEqual([]);
        await signIn(page, demo, person);
        signedIn = person;
      }
      await page.goto(`${demo.address}${path}`);
      await expect(page.getByRole('heading', { level: 1 }).first()).toBeVisible();
      await page.waitForLoadState('networkidle');
      const { violations } = await new AxeBuilder({ page }).withTags(rules).analyze();
      expect(violations.map(({ id, nodes }) => `${path} ${id}: ${nodes[0]?.html ?? ''}`)).toEqual([]);
    }
  });
}
