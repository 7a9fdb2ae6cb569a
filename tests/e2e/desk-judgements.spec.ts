import type { Page, Route } from '@playwright/test';
import type { ScriptedPerson, ScriptedTablet } from '@db/scripted-tablet';
import { expect, islandsReady, test } from '../support/e2e';
import { demoPerson, signInAtDesk } from '../support/e2e-people';
import { seedJob } from '../support/e2e-seed';
import { readTrail } from '../support/e2e-trail';

const CLOTHS = 'reassembly.cloths-in';
const supervisor = demoPerson('supervisor');

/** Past the marked caps: a cloth too few by the record, which whoever counted then puts right. */
async function miscountAndCorrect(tablet: ScriptedTablet, job: string, by: ScriptedPerson): Promise<void> {
  const out = tablet.held(job).state.tallies.cloths?.out ?? 0;
  const counted = { kind: 'counted', step: CLOTHS, data: { count: out - 1 } } as const;
  const { id: of } = await tablet.record(job, counted, { by });
  const data = { of, class: 'substantive', reason: 'one stuck to another', data: { count: out } } as const;
  await tablet.record(job, { kind: 'corrected', step: CLOTHS, data }, { by });
}

async function judge(page: Page, button: string, field: 'Your PIN' | 'Reason', answer: string) {
  const dialog = page.getByRole('dialog');
  await dialog.getByLabel(field).fill(answer);
  await dialog.getByRole('button', { name: button, exact: true }).tap();
}

test('a correction is countersigned and a signature revoked at the desk', async ({
  app,
  page,
  expectedErrors,
}) => {
  expectedErrors.push(/net::ERR_FAILED.*api\/sync/);
  const job = await seedJob(app, { until: CLOTHS, then: miscountAndCorrect });
  await signInAtDesk(page, supervisor);
  await page.goto(`/jobs/${job.id}`);
  await islandsReady(page);
  const part = (title: string) =>
    page.locator('section.part').filter({ has: page.getByRole('heading', { name: title, exact: true }) });

  await test.step('the deviation stays open until somebody else countersigns', async () => {
    const blocks = part('What blocks it');
    await expect(blocks).toContainText(/Deviation, class A: .*went out, .*came back/);
    await expect(blocks).toContainText('Its value was corrected since.');
    const corrected = part('Corrected');
    await expect(corrected).toContainText('Countersign due: the deviation stays open until then');
    await corrected.getByRole('button', { name: 'Countersign' }).tap();
    await expect(page.getByRole('dialog')).toContainText('one stuck to another');
    await judge(page, 'Countersign', 'Your PIN', '111111');
    await expect(page.getByRole('alert')).toContainText('The PIN was wrong. Sign again.');
    // The network fails once it is signed: it is kept, and sent as it was signed.
    const cut = (route: Route) =>
      route.request().postData()?.includes('countersigned') === true ? route.abort() : route.continue();
    await page.route('**/api/sync', cut);
    await judge(page, 'Countersign', 'Your PIN', supervisor.pin);
    await expect(page.getByRole('dialog')).toContainText('Signed, and kept in this browser');
    await page.unroute('**/api/sync', cut);
    await page.getByRole('button', { name: 'Send it now' }).tap();
    await expect(page.getByRole('dialog')).toHaveCount(0);
    await expect(blocks).toContainText('Nothing blocks it.');
  });

  await test.step('the hold point opens again, and the page says what was done past it', async () => {
    await part('Signed').getByRole('button', { name: 'Revoke' }).first().tap();
    await judge(page, 'Revoke it', 'Reason', 'the marks of rod 4 were not looked at');
    await expect(page.getByRole('dialog')).toHaveCount(0);
    await expect(part('Corrected')).toContainText(
      /\d steps were done past a hold point that was opened again/,
    );
    await expect(part('Corrected')).toContainText('not signed again yet');
    await expect(part('Corrected')).toContainText('cloths');
    await expect(part('What blocks it')).toContainText('Signature due');
    await expect(part('Signed')).toContainText('revoked: the marks of rod 4 were not looked at');
  });

  await test.step('the trail tells all of it in words', async () => {
    await page.getByRole('link', { name: 'Read the trail' }).tap();
    await expect(page.getByRole('status')).toContainText(
      `Unbroken from entry 1 to ${readTrail(app, job.id).length}`,
    );
    const ledger = page.getByRole('table', { name: 'The entries of this job in order' });
    const line = (words: RegExp) => ledger.getByRole('row').filter({ hasText: words });
    await expect(line(/Correction \(substantive\): one stuck to another/)).toContainText('Ines Varga');
    await expect(line(/Refused and kept aside: The PIN was wrong/)).toHaveCount(1);
    await expect(line(/^\d+.*Countersigned/)).toContainText(supervisor.name);
    await expect(line(/Revoked: the marks of rod 4 were not looked at/)).toContainText(supervisor.name);
  });
});
