import { expect, test, type Page } from '@playwright/test';
import { openPlant, openTab, signIn } from './support';

const file = (name: string, content: string | Buffer, mimeType = 'text/csv') => ({
  name,
  mimeType,
  buffer: Buffer.from(content),
});
const PDF = Buffer.concat([Buffer.from('%PDF-1.7\n%\xe2\xe3\xcf\xd3\n', 'latin1'), Buffer.alloc(400, 1)]);
const NO_TIME = 'CH-1 Supply,CH-1 Return\n' + Array.from({ length: 60 }, (_, row) => `44.${row},56.${row}`).join('\n');

test.beforeEach(async ({ page }) => {
  await signIn(page, 'engineer');
  await openPlant(page, 'Quadrangle loop');
  await openTab(page, 'Uploads');
});

const drop = (page: Page, chosen: ReturnType<typeof file>) => page.getByLabel('Trend files').setInputFiles(chosen);

test('a PDF is refused with a sentence that says to export CSV', async ({ page }) => {
  await drop(page, file('report.csv', PDF));
  await expect(
    page
      .getByText(/CSV/)
      .filter({ hasText: /export/i })
      .first(),
  ).toBeVisible();
  await expect(page.getByText(/not sent|failed/).first()).toBeVisible();
});

test('an empty file is refused before anything is sent', async ({ page }) => {
  await drop(page, file('empty.csv', ''));
  await expect(
    page
      .getByRole('alert')
      .filter({ hasText: 'empty.csv' })
      .or(page.getByText(/"empty.csv" is empty/))
      .first(),
  ).toBeVisible();
});

test('a file without a time column fails with a sentence, and can be removed', async ({ page }) => {
  const name = `no-time-${Date.now()}.csv`;
  await drop(page, file(name, NO_TIME));
  const row = page.locator('tr[data-upload]').filter({ hasText: name });
  await expect(row).toHaveAttribute('data-status', 'failed');
  await expect(page.getByText(/no .*time|time column/i).first()).toBeVisible();
  await row.getByRole('button', { name: `remove ${name}` }).click();
  await page.getByRole('button', { name: 'Remove' }).click();
  await expect(row).toHaveCount(0);
});

test('a wrong password says how many tries are left and nothing about the address', async ({ browser }) => {
  const page = await (await browser.newContext()).newPage();
  await page.goto('/sign-in');
  await page.getByLabel('E-mail').fill(`nobody-${Date.now()}@demo.example`);
  await page.getByLabel('Password').fill('not the password');
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByRole('alert').filter({ hasText: /do not match|tries/ })).toBeVisible();
});
