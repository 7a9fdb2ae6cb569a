import { expect, type Locator, type Page } from '@playwright/test';

/** Opens a job from the Floor's first screen. */
export async function openOnFloor(page: Page, number: string): Promise<void> {
  const row = page.getByRole('listitem').filter({ hasText: `Job ${number}` });
  await expect(row).toContainText('works offline');
  await row.getByRole('button', { name: new RegExp(`^Job ${number}`) }).tap();
  await expect(page.getByRole('heading', { level: 1, name: 'The Floor' })).toHaveCount(0);
  await expect(page.getByRole('heading', { level: 1 }).first()).toBeVisible();
  // What was seeded was done at another tablet by the same person.
  const here = page.getByRole('button', { name: 'Go on here' });
  if (!(await here.isVisible())) return;
  await hold(page, here);
  // A touch right after a record is taken for the same touch.
  await expect(page.getByTestId('edge-flash')).toHaveCount(0);
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

/** Holds a button down until it has acted and is gone. */
export async function hold(page: Page, button: Locator): Promise<void> {
  const box = await button.boundingBox();
  if (box === null) throw new Error('What is held is on the screen.');
  await page.mouse.move(box.x + box.width / 2, box.y + box.height / 2);
  await page.mouse.down();
  await expect(button).toHaveCount(0);
  await page.mouse.up();
}
