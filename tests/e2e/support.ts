import { expect, type Page, type TestInfo } from '@playwright/test';

export const PASSWORD = process.env.DEMO_PASSWORD ?? 'still-water-runs-back';
export type DemoPerson = 'owner' | 'engineer' | 'consultant' | 'operator';

/** Signs in through the form, as a person would. */
export async function signIn(page: Page, person: DemoPerson): Promise<void> {
  await page.goto('/sign-in');
  await page.getByLabel('E-mail').fill(`${person}@demo.example`);
  await page.getByLabel('Password').fill(PASSWORD);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByRole('heading', { name: 'Plants', level: 1 })).toBeVisible();
}

/** Opens a plant of the list by its name. */
export async function openPlant(page: Page, name: string): Promise<void> {
  await page
    .getByRole('rowheader', { name: new RegExp(name) })
    .getByRole('link')
    .click();
  await expect(page.getByRole('heading', { name, level: 1 })).toBeVisible();
}

/** Goes to a page of the plant in view; on a phone some tabs are behind "More". */
export async function openTab(
  page: Page,
  name: 'Plant' | 'Hours' | 'Sensors' | 'Uploads' | 'Alerts' | 'Settings',
): Promise<void> {
  const nav = page.getByRole('navigation', { name: 'Plant pages' }).filter({ visible: true });
  const link = nav.getByRole('link', { name, exact: true });
  if (await link.isVisible()) await link.click();
  else {
    await nav.getByRole('button', { name: /More/ }).click();
    await page.getByRole('menuitem', { name, exact: true }).click();
  }
  if (name !== 'Plant') await expect(page.getByRole('heading', { name, level: 1 })).toBeVisible();
}

/** Whatever the browser complained of since the call: page errors, and policy violations or errors on the console. */
export function complaints(page: Page): string[] {
  const heard: string[] = [];
  page.on('pageerror', (error) => heard.push(`page error: ${error.message}`));
  page.on('console', (message) => {
    // A refused request is the page's to show, and tests of refusals make some on purpose.
    if (message.type() === 'error' && !message.text().startsWith('Failed to load resource')) heard.push(message.text());
  });
  return heard;
}

/** Keeps a picture of the whole page for people to look at. */
export async function keepPicture(page: Page, info: TestInfo, name: string): Promise<void> {
  await page.evaluate(() => document.fonts.ready);
  await page.screenshot({ path: `tests/e2e/screenshots/${name}-${info.project.name}.png`, fullPage: true });
}

/** A page never scrolls sideways. */
export async function expectNoSidewaysScroll(page: Page): Promise<void> {
  const over = await page.evaluate(() => document.documentElement.scrollWidth - innerWidth);
  expect(over).toBeLessThanOrEqual(0);
}

/** Drops a file on the page as a person does: over the window, let go. */
export async function dropFile(page: Page, name: string, text: string): Promise<void> {
  const transfer = await page.evaluateHandle(
    ([fileName, content]) => {
      const data = new DataTransfer();
      data.items.add(new File([content], fileName, { type: 'text/csv' }));
      return data;
    },
    [name, text] as const,
  );
  await page.dispatchEvent('body', 'dragenter', { dataTransfer: transfer });
  await expect(page.getByText(/^let go to upload to /)).toBeVisible();
  await page.dispatchEvent('body', 'drop', { dataTransfer: transfer });
  await expect(page.getByText(/^let go to upload to /)).toHaveCount(0);
}
