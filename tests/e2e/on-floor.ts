import { expect, type Page } from '@playwright/test';

/** Opens a job from the Floor's first screen. */
export async function openOnFloor(page: Page, number: string): Promise<void> {
  const row = page.getByRole('listitem').filter({ hasText: `Job ${number}` });
  await expect(row).toContainText('works offline');
  await row.getByRole('button', { name: new RegExp(`^Job ${number}`) }).tap();
}

/** Sends what is on the tablet and waits until the server has all of it; says how much that is. */
export async function sendAll(page: Page): Promise<number> {
  await page.getByRole('button', { name: /where the records are/ }).tap();
  const sheet = page.getByRole('dialog');
  await expect(async () => {
    await sheet.getByRole('button', { name: 'Send now' }).tap();
    await expect(sheet.getByRole('status').first()).toContainText(/All sent/i, { timeout: 2000 });
  }).toPass();
  const told = await sheet.getByText(/made on this tablet are with the server/).innerText();
  await sheet.getByRole('button', { name: /close/i }).tap();
  await expect(sheet).toHaveCount(0);
  return Number(/\d+/.exec(told)?.[0]);
}
