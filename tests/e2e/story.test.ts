import { readFile } from 'node:fs/promises';
import { expect, test } from '@playwright/test';
import { weekCsv } from '../../fixtures/demo';
import { complaints, dropFile, keepPicture, openPlant, openTab, signIn } from './support';

// The whole job once, in order, on one database: each step stands on the one before.
test.describe.configure({ mode: 'serial' });

const PLANT = `Story plant ${Date.now()}`;
const today = new Intl.DateTimeFormat('en-CA', { timeZone: 'America/New_York' }).format(Date.now());
const week = { name: 'week.csv', mimeType: 'text/csv', buffer: Buffer.from(weekCsv('hospital', today)) };

test('an engineer adds a plant, drops a week, confirms the columns and sees what ran backwards', async ({
  page,
}, info) => {
  const heard = complaints(page);
  await signIn(page, 'engineer');
  await page.getByRole('link', { name: 'Add a plant' }).click();
  await page.getByLabel('Name', { exact: true }).fill(PLANT);
  await page.getByLabel(/^Load delta-T/).fill('12');
  await page.getByLabel(/^Design load/).fill('1260');
  for (const [index, name] of ['CH-1', 'CH-2', 'CH-3'].entries()) {
    if (index > 0) await page.getByRole('button', { name: 'another unit' }).click();
    const unit = page.getByRole('listitem').nth(index);
    await unit.getByLabel('name').fill(name);
    await unit.getByLabel(/^rated/).fill('420');
    await unit.getByLabel(/^design flow/).fill('840');
  }
  await keepPicture(page, info, 'new-plant');
  await page.getByRole('button', { name: 'Add the plant' }).click();
  await expect(page.getByRole('heading', { name: 'Uploads', level: 1 })).toBeVisible();
  await expect(page.getByText('No file yet.')).toBeVisible();

  await dropFile(page, 'week.csv', week.buffer.toString());
  const row = page.locator('tr[data-upload]').first();
  await expect(row).toHaveAttribute('data-status', 'needs-mapping');
  await keepPicture(page, info, 'uploads-needs-mapping');
  await row.getByRole('link', { name: 'map' }).click();
  await expect(page.getByRole('heading', { name: 'Mapping', level: 1 })).toBeVisible();
  await expect(
    page.getByRole('combobox', { name: /^Role of/ }).filter({ hasText: 'secondary return temperature' }),
  ).toHaveCount(1);
  await keepPicture(page, info, 'mapping');
  await page.getByRole('button', { name: 'Confirm and import' }).click();
  await expect(page.getByRole('heading', { name: 'Uploads', level: 1 })).toBeVisible();
  await expect(row).toHaveAttribute('data-status', 'done', { timeout: 30_000 });
  await expect(page.getByText(/^The record runs to /)).toBeVisible();
  await keepPicture(page, info, 'uploads-done');

  await openTab(page, 'Plant');
  await expect(
    page.getByText(/Return water ran backwards through the common pipe for \d+:\d\d hours on \d of 7 days/),
  ).toBeVisible();
  await expect(page.getByText(/Supply to the buildings reached \d\d\.\d/)).toBeVisible();
  await keepPicture(page, info, 'plant-of-the-story');
  expect(heard).toEqual([]);
});

test('a heading seen before maps itself, and undo takes the values out again', async ({ page }) => {
  await signIn(page, 'engineer');
  await openPlant(page, PLANT);
  await openTab(page, 'Uploads');
  await page.getByLabel('Trend files').setInputFiles({ ...week, name: 'again.csv' });
  const row = page.locator('tr[data-upload]').filter({ hasText: 'again.csv' });
  await expect(row).toHaveAttribute('data-status', 'done', { timeout: 30_000 });
  await row.getByRole('button', { name: 'undo again.csv' }).click();
  await page.getByRole('button', { name: 'Take out' }).click();
  await expect(row).toHaveCount(0);
  await openTab(page, 'Plant');
  await expect(page.getByText(/Return water ran backwards/)).toBeVisible();
});

test('a consultant of two organizations reads the ranked hours, and takes them along as CSV', async ({
  page,
}, info) => {
  const heard = complaints(page);
  await signIn(page, 'consultant');
  await expect(page.getByText(/plants? of two owners/)).toBeVisible();
  await keepPicture(page, info, 'plants-of-the-consultant');
  await openPlant(page, 'Infirmary energy centre');
  await openTab(page, 'Hours');
  const excess = page.locator('table').filter({ hasText: 'excess flow' }).first().locator('tbody tr');
  await expect(excess.first()).toBeVisible();
  await keepPicture(page, info, 'hours');
  const download = page.waitForEvent('download');
  await page.getByRole('link', { name: 'CSV' }).click();
  const text = await readFile(await (await download).path(), 'utf8');
  const [header, ...rows] = text.trim().split(/\r?\n/);
  expect(header).toBe(
    'hour_start,low,load_tons,delta_t_f,expected_delta_t_f,production_delta_t_f,reverse_minutes,reverse_flow_gpm,blended_supply_f,blended_supply_max_f,excess_flow_gpm,avoidable_flow_gpm,cause,cause_confidence,excess_energy_kwh,excess_cost,stranded_tons,unknown_minutes,quality',
  );
  const excessFlows = rows.map((row) => Number(row.split(',')[10]));
  expect(excessFlows.length).toBeGreaterThan(20);
  expect(excessFlows).toEqual([...excessFlows].sort((a, b) => b - a));
  await excess.first().getByRole('link').click();
  await expect(page.getByRole('heading', { level: 2, name: /Tee sheet/ })).toBeVisible();
  await expect(page.getByText('Before anything is changed.')).toBeVisible();
  await keepPicture(page, info, 'hour');
  expect(heard).toEqual([]);
});

test('the alert for yesterday is one mail to the operator, also when it is asked for twice', async ({
  page,
  request,
}, info) => {
  await signIn(page, 'engineer');
  await openPlant(page, 'Infirmary energy centre');
  await openTab(page, 'Alerts');
  const latest = page.locator('tr[data-outcome]').first();
  for (const outcome of [/sent|already-sent/, /already-sent/]) {
    await page.getByRole('button', { name: 'Evaluate yesterday now' }).click();
    await expect(latest).toHaveAttribute('data-outcome', outcome);
  }
  await keepPicture(page, info, 'alerts');
  const mails = (await (await request.get('/dev/mailbox?format=json')).json()) as {
    to: string | string[];
    subject: string;
    text: string;
  }[];
  const ours = mails.filter((mail) => mail.subject.includes('Infirmary energy centre'));
  expect(ours).toHaveLength(1);
  expect(String(ours[0]?.to)).toContain('operator@demo.example');
  expect(ours[0]?.text).toContain('It ran backwards for');

  await page.goto('/dev/mailbox');
  await page
    .getByRole('link', { name: /Infirmary energy centre/ })
    .first()
    .click();
  await expect(page.frameLocator('iframe').getByText(/It ran backwards for/)).toBeVisible();
  await keepPicture(page, info, 'mailbox');
});

test('the operator acknowledges from the mail with one tap, and the alerts page says who', async ({
  page,
  request,
}) => {
  const mails = (await (await request.get('/dev/mailbox?format=json')).json()) as { subject: string; text: string }[];
  const mail = mails.find(({ subject }) => subject.includes('Infirmary energy centre'));
  const link = /Acknowledge:\s+(\S+)/.exec(mail?.text ?? '')?.[1] ?? '';
  expect(link).not.toBe('');
  await page.goto(new URL(link).pathname);
  await expect(page.getByText(/acknowledged,? \d\d:\d\d/i)).toBeVisible();
  await signIn(page, 'operator');
  await openPlant(page, 'Infirmary energy centre');
  await openTab(page, 'Alerts');
  await expect(page.getByText(/by Dell Amara/)).toBeVisible();
  await expect(page.getByRole('button', { name: 'Evaluate yesterday now' })).toHaveCount(0);
});
