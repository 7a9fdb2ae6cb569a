import { expect, type Page } from '@playwright/test';
import { demoSignIns, type DemoSignIn } from '@db/seed';
import { islandsReady } from './e2e';

/** Somebody of the demo workshop, by the name of their mailbox. */
export function demoPerson(mailbox: string): DemoSignIn {
  const found = demoSignIns.find(({ email }) => email.startsWith(`${mailbox}@`));
  if (found === undefined) throw new RangeError(`The demo has nobody called ${mailbox}.`);
  return found;
}

/** Signs somebody in at a desk. */
export async function signInAtDesk(page: Page, { email, password }: DemoSignIn): Promise<void> {
  await page.goto('/sign-in');
  await islandsReady(page);
  await page.getByLabel('E-mail address').fill(email);
  await page.getByLabel('Password').fill(password);
  await page.getByRole('button', { name: 'Sign in' }).tap();
  await page.waitForURL((url) => !url.pathname.startsWith('/sign-in'));
  await islandsReady(page);
}

/** Signs one more person in on the Floor's first screen, and names the tablet where that is still asked. */
export async function signInOnFloor(
  page: Page,
  { name, email, password }: DemoSignIn,
  { tablet }: { tablet?: string } = {},
): Promise<void> {
  const add = page.getByRole('button', { name: 'Add a person' });
  const field = page.getByLabel('E-mail', { exact: true });
  await expect(add.or(field)).toBeVisible();
  if (await add.isVisible()) await add.tap();
  await field.fill(email);
  await page.getByLabel('Password').fill(password);
  await page.getByRole('button', { name: 'Sign in', exact: true }).tap();
  // Before the tablet is enrolled the name is followed by what the person still lacks here.
  const own = page.getByRole('button', { name: new RegExp(`^${name}`) });
  await expect(own).toHaveAttribute('aria-pressed', 'true');
  if (tablet === undefined) return;
  await page.getByRole('button', { name: tablet, exact: true }).tap();
  await page.getByRole('button', { name: 'Enrol the tablet' }).tap();
  await expect(page.getByRole('heading', { name: 'Open jobs' })).toBeVisible();
}
