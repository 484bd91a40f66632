import AxeBuilder from '@axe-core/playwright';
import { expect, test } from '@playwright/test';
import { complaints, expectNoSidewaysScroll, keepPicture, openPlant, openTab, signIn } from './support';

for (const colorScheme of ['light', 'dark'] as const) {
  test.describe(`in ${colorScheme}`, () => {
    test.use({ colorScheme });

    test('every page of a plant stands without complaint, sideways scroll or accessibility fault', async ({
      page,
    }, info) => {
      test.slow(); // many pages, each looked at and checked
      const heard = complaints(page);
      const look = async (name: string) => {
        await page.waitForLoadState('networkidle');
        await keepPicture(page, info, `${name}-${colorScheme}`);
        await expectNoSidewaysScroll(page);
        const { violations } = await new AxeBuilder({ page })
          .withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa'])
          .analyze();
        expect(violations.map(({ id, nodes }) => `${name}: ${id} at ${nodes[0]?.target.join(' ') ?? ''}`)).toEqual([]);
      };
      await page.goto('/sign-in');
      await look('page-sign-in');
      await page.goto('/method');
      await expect(page.getByRole('heading', { name: 'How it is worked out', level: 1 })).toBeVisible();
      await look('page-method');
      await signIn(page, 'operator');
      await look('page-plants');
      await openPlant(page, 'Assay Row laboratories');
      await expect(page.getByText(/Return water ran backwards/)).toBeVisible();
      await look('page-plant');
      await openTab(page, 'Hours');
      const first = page.locator('table').filter({ hasText: 'cause' }).locator('tbody th a').first();
      await expect(first).toBeVisible();
      await look('page-hours');
      await first.click();
      await expect(page.getByRole('heading', { name: /Tee sheet/ })).toBeVisible();
      await look('page-hour');
      for (const tab of ['Sensors', 'Uploads', 'Alerts', 'Settings'] as const) {
        await openTab(page, tab);
        if (tab === 'Sensors') await expect(page.getByRole('table', { name: /^Sensors/ })).toBeVisible();
        await look(`page-${tab.toLowerCase()}`);
      }
      expect(heard).toEqual([]);
    });
  });
}

test('how a number is worked out is one click from any page, signed in or not', async ({ page }) => {
  await signIn(page, 'operator');
  await openPlant(page, 'Quadrangle loop');
  await page.getByRole('contentinfo').getByRole('link', { name: 'How it is worked out' }).click();
  await expect(page.getByRole('heading', { name: 'How it is worked out', level: 1 })).toBeVisible();
  const person = page.getByRole('banner').getByRole('button', { name: /Signed in as operator@demo\.example/ });
  await expect(person.filter({ visible: true })).toBeVisible();
  await page.getByRole('link', { name: 'Sources' }).click();
  await expect(page.getByRole('heading', { name: /Sources/ })).toBeInViewport();
  await page.context().clearCookies();
  await page.reload();
  await expect(page.getByRole('banner').getByRole('link', { name: 'Sign in' })).toBeVisible();
});

test('a page that needs sign-in comes back to itself after it', async ({ page }) => {
  await signIn(page, 'operator');
  await openPlant(page, 'Quadrangle loop');
  const address = new URL(page.url()).pathname;
  await page.context().clearCookies();
  await page.goto(address);
  await expect(page).toHaveURL(/\/sign-in\?next=/);
  await page.getByLabel('E-mail').fill('operator@demo.example');
  await page.getByLabel('Password').fill(process.env.DEMO_PASSWORD ?? 'still-water-runs-back');
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByRole('heading', { name: 'Quadrangle loop', level: 1 })).toBeVisible();
});

test("another organization's plant is not there", async ({ page }) => {
  await signIn(page, 'consultant');
  await openPlant(page, 'Pellmarsh House');
  const address = new URL(page.url()).pathname;
  await page.context().clearCookies();
  await signIn(page, 'engineer');
  const response = await page.goto(address);
  expect(response?.status()).toBe(404);
  await expect(page.getByRole('heading', { name: 'Nothing is here' })).toBeVisible();
});

test('signing up starts an organization with nothing in it', async ({ page }) => {
  await page.goto('/sign-up');
  await page.getByLabel('Organization', { exact: true }).fill('A new house');
  await page.getByLabel('Your name').fill('Nia Tor');
  await page.getByLabel('E-mail').fill(`nia-${Date.now()}-${Math.round(performance.now())}@new.example`);
  await page.getByLabel('Password').fill('a long enough secret');
  await page.getByRole('button', { name: 'Start', exact: true }).click();
  await expect(page.getByText('No plant yet.')).toBeVisible();
});
