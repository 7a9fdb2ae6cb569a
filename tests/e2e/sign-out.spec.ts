import type { Page } from '@playwright/test';
import { expect, islandsReady, test } from '../support/e2e';
import { demoPerson, signInOnFloor } from '../support/e2e-people';
import { seedJob } from '../support/e2e-seed';
import { readTrail } from '../support/e2e-trail';
import { openOnFloor, sendAll } from './on-floor';

/* Somebody leaves the tablet: their session ends, the others' go on, and what they recorded is kept. */

const ines = demoPerson('ines');
const bram = demoPerson('bram');

test('one person signs out, and the others stay signed in', async ({ page }) => {
  await openWithTwo(page);
  await signOut(page);
  await expect(page.getByRole('button', { name: ines.name, exact: true })).toHaveCount(0);
  await expect(page.getByRole('button', { name: bram.name, exact: true })).toBeVisible();
  await expect.poll(() => signedInAtServer(page)).toEqual([bram.name]);
});

test('signing out without a network is done at the server when it is back, and loses no record', async ({
  app,
  page,
  context,
  expectedErrors,
}) => {
  expectedErrors.push(/ERR_INTERNET_DISCONNECTED/);
  const job = await seedJob(app, {
    until: ({ steps }) => steps.find(({ kind }) => kind === 'remove')?.id,
    people: [ines],
  });
  await openWithTwo(page);
  await openOnFloor(page, job.number);
  const main = page.getByRole('contentinfo').getByRole('button').last();
  await expect(main).toBeEnabled();
  // The job was taken up here, which is a record too.
  await sendAll(page);
  const before = readTrail(app, job.id).length;
  await context.setOffline(true);
  await page.getByRole('button', { name: 'Problem' }).tap();
  const sheet = page.getByRole('dialog');
  await sheet.getByRole('button', { name: 'Raise a deviation' }).tap();
  await sheet.getByRole('textbox').fill('old paint on the tray');
  await sheet.getByRole('radio', { name: 'goes on' }).tap({ force: true });
  await sheet.getByRole('button', { name: 'Raise the deviation' }).tap();
  await expect(sheet).toHaveCount(0);

  await page.getByRole('button', { name: /change who is working/ }).tap();
  await sheet.getByRole('button', { name: `Sign ${ines.name} out` }).tap();
  await expect(sheet.getByText(/1 record is not sent yet\. It is kept here/)).toBeVisible();
  await expect(sheet.getByText(/the server is told as soon as there is a network/)).toBeVisible();
  await sheet.getByRole('button', { name: 'Sign out' }).tap();
  await expect(page.getByRole('heading', { name: 'Open jobs' })).toBeVisible();
  await expect(page.getByRole('button', { name: ines.name, exact: true })).toHaveCount(0);

  await context.setOffline(false);
  await expect.poll(() => signedInAtServer(page)).toEqual([bram.name]);
  await expect.poll(() => readTrail(app, job.id).length).toBe(before + 1);
  expect(readTrail(app, job.id).at(-1)?.body).toMatchObject({ author: { name: ines.name } });
  // Signing in again, they are back beside the other.
  await signInOnFloor(page, ines);
  await expect.poll(() => signedInAtServer(page)).toEqual([bram.name, ines.name].sort());
});

async function openWithTwo(page: Page): Promise<void> {
  await page.goto('/floor');
  await islandsReady(page);
  await signInOnFloor(page, bram, { tablet: 'Bay 1' });
  await signInOnFloor(page, ines);
}

async function signOut(page: Page): Promise<void> {
  await page.getByRole('button', { name: `Sign ${ines.name} out` }).tap();
  const sheet = page.getByRole('dialog');
  await expect(sheet.getByText(`Everything that ${ines.name} recorded here has been sent.`)).toBeVisible();
  await sheet.getByRole('button', { name: 'Sign out' }).tap();
  await expect(sheet).toHaveCount(0);
}

/** Who the server has signed in at this browser. */
async function signedInAtServer(page: Page): Promise<string[]> {
  const answer = await page.request.get('/api/me');
  // The session that was active may have ended, and the next one is not active yet.
  if (!answer.ok()) return [];
  const { sideBySide } = (await answer.json()) as { sideBySide: { name: string }[] };
  return sideBySide.map(({ name }) => name).sort();
}
