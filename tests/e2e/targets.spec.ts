import { expect, islandsReady, test } from '../support/e2e';
import { demoPerson, signInOnFloor } from '../support/e2e-people';
import { picture } from '../support/e2e-picture';
import { seedJob } from '../support/e2e-seed';
import { expectLargeTargets } from '../support/e2e-targets';
import { FloorDriver } from './floor-driver';
import { openOnFloor } from './on-floor';

test('the tightening, the gauge and the list of steps have targets for gloves', async ({ app, page }) => {
  const job = await seedJob(app, {
    until: ({ steps }) => steps.find(({ kind }) => kind === 'gauge')?.id,
  });
  await page.goto('/floor');
  await islandsReady(page);
  await signInOnFloor(page, demoPerson('ines'), { tablet: 'Bay 1' });
  const floor = new FloorDriver(page, picture);
  await openOnFloor(page, job.number);

  await test.step('gauge, before a band was touched', async () => {
    await floor.runUntil(({ words }) => words.startsWith('touch a band'));
    await expectLargeTargets(page);
  });
  await test.step('gauge, the front kept and its verdict over the rear', async () => {
    await floor.runUntil(({ heading }) => heading.endsWith(', rear'));
    await expect(page.getByRole('region', { name: 'The reading just kept' })).toContainText('Inside');
    await expectLargeTargets(page);
  });
  await test.step('the list of steps', async () => {
    await page.getByRole('button', { name: /list of steps/ }).tap();
    await expect(page.getByRole('dialog', { name: 'Steps' })).toBeVisible();
    await expectLargeTargets(page);
    await page.getByRole('dialog').getByRole('button', { name: 'Close' }).tap();
  });
  await test.step('tightening: choosing the tool, and a pass', async () => {
    await floor.runUntil(({ main }) => main === 'Choose the torque wrench');
    await expectLargeTargets(page);
    await floor.runUntil(({ main }) => main === 'Both at 8 N·m');
    await expectLargeTargets(page);
  });
});
