import { expect, test } from '@playwright/test';
import { complaints, expectNoSidewaysScroll, openPlant, openTab, signIn } from './support';

test('a reading of a reference thermometer is entered, counts, and is taken out again', async ({ page }) => {
  test.slow(); // the record is worked out twice
  const heard = complaints(page);
  await signIn(page, 'engineer');
  await openPlant(page, 'Infirmary energy centre');
  await openTab(page, 'Sensors');
  const sensors = page.getByRole('table', { name: /^Sensors/ });
  await expect(sensors.getByRole('rowheader', { name: /^Secondary supply/ })).toBeVisible();

  const form = page.getByRole('form', { name: 'Enter a spot check' });
  await form.getByLabel('What was read').click();
  await page.getByRole('option', { name: 'Secondary supply' }).click();
  await form.getByLabel(/^The reference showed/).fill('7');
  await form.getByRole('button', { name: 'Enter the reading' }).click();
  await expect(
    form.getByText('Chilled water lies between 20 and 120 °F: check the unit of the reading.'),
  ).toBeVisible();

  await form.getByLabel(/^The reference showed/).fill('44.1');
  await form.getByLabel(/^The plant’s own showed/).fill('44.5');
  await form.getByLabel('Instrument').fill('dry block 3');
  await form.getByRole('button', { name: 'Enter the reading' }).click();
  const checks = page.getByRole('table', { name: /^Spot checks/ });
  const row = checks.getByRole('row').filter({ hasText: 'dry block 3' });
  await expect(row).toContainText('+0.4');
  await expect(page.getByText(/being worked out again/)).toBeVisible();
  await expect(page.getByText(/being worked out again/)).toHaveCount(0, { timeout: 90_000 });
  await expect(sensors.getByRole('row', { name: /^Secondary supply/ })).toContainText(
    'A reference instrument was read',
  );
  await expectNoSidewaysScroll(page);

  await row.getByRole('button', { name: /^remove/ }).click();
  await page.getByRole('button', { name: 'Take out' }).click();
  await expect(page.getByText('None yet.')).toBeVisible();
  await expect(page.getByText(/being worked out again/)).toHaveCount(0, { timeout: 90_000 });
  expect(heard).toEqual([]);
});

test('an operator reads the sensors and has no form to fill', async ({ page }) => {
  await signIn(page, 'operator');
  await openPlant(page, 'Assay Row laboratories');
  await openTab(page, 'Sensors');
  await expect(page.getByText(/can enter a reading/)).toBeVisible();
  await expect(page.getByRole('form')).toHaveCount(0);
});
