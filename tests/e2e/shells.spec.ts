import AxeBuilder from '@axe-core/playwright';
import type { Page } from '@playwright/test';
import type { ScriptedPerson, ScriptedTablet } from '@db/scripted-tablet';
import type { EntryData } from '@/domain/entry';
import type { StepOf } from '@/domain/plan';
import { expect, islandsReady, test } from '../support/e2e';
import { demoPerson, signInOnFloor } from '../support/e2e-people';
import { seedJob, signInToApi, type SeededJob } from '../support/e2e-seed';
import { expectLargeTargets, expectMainInSight } from '../support/e2e-targets';
import { hold, openOnFloor, sendAll } from './on-floor';

/*
 * A rod that was read outside its limits goes back to its shells: the shelf is counted, grades are proposed,
 * others are taken with a reason, and the record keeps both.
 */

const MINUTE = 60_000;
const SIZES = [
  { width: 820, height: 1180 },
  { width: 1180, height: 820 },
];

const ines = demoPerson('ines');
const supervisor = demoPerson('supervisor');

function firstGauge({ steps }: SeededJob['plan']): StepOf<'gauge'> {
  const step = steps.find((one): one is StepOf<'gauge'> => one.kind === 'gauge');
  if (!step) throw new Error('The plan measures no rod.');
  return step;
}

/** Large targets, the main action in sight, and nothing that axe finds, lying and standing, dark and light. */
async function expectGood(page: Page): Promise<void> {
  for (const size of SIZES) {
    await page.setViewportSize(size);
    await expectLargeTargets(page);
    await expectMainInSight(page);
    for (const theme of ['graphite', 'paper']) {
      await page.evaluate((wanted) => document.documentElement.setAttribute('data-theme', wanted), theme);
      const { violations } = await new AxeBuilder({ page }).analyze();
      expect(violations.map(({ id, nodes }) => `${id}: ${nodes[0]?.html ?? ''}`)).toEqual([]);
    }
  }
}

test('a rod outside its limits gets shells that are proposed from the shelf', async ({ app, page }) => {
  test.setTimeout(5 * MINUTE);
  const judge = await signInToApi(app, supervisor);
  async function readTooWide(tablet: ScriptedTablet, job: string, by: ScriptedPerson): Promise<void> {
    const { plan } = tablet.held(job).state;
    const step = firstGauge(plan).id;
    for (const end of ['front', 'rear'] as const) {
      const data: EntryData<'gauged'> = {
        ...{ end, by: 'band', clearance: end === 'front' ? '0.076' : '0.074', uncertainty: '0.002' },
        ...{ unit: 'mm', again: 'first', threadLot: 'T-1', cardLot: 'T-1' },
      };
      await tablet.record(job, { kind: 'gauged', step, data }, { by });
    }
    for (const { id } of tablet.held(job).state.deviations.filter(({ disposed }) => !disposed)) {
      const data = { deviation: id, disposition: 'rework', reason: 'thicker shells' } as const;
      await tablet.record(job, { kind: 'deviation-disposed', data }, { by: judge });
    }
  }
  const { number, id, plan } = await seedJob(app, { until: (one) => firstGauge(one).id, then: readTooWide });
  await page.goto('/floor');
  await islandsReady(page);
  await signInOnFloor(page, ines, { tablet: 'Bay 1' });
  await openOnFloor(page, number);
  await expect(page.getByRole('heading', { name: /^Take over from/ })).toBeVisible();
  for (const digit of ines.pin) await page.getByRole('button', { name: digit, exact: true }).tap();
  await hold(page, page.getByRole('button', { name: 'Take the job over' }));

  await test.step('the shelf is counted on number keys', async () => {
    await expect(page.getByRole('heading', { name: 'Count the half shells on the shelf' })).toBeVisible();
    await expectGood(page);
    const grades = plan.engine.shells.grades;
    for (const [index, { grade }] of grades.entries()) {
      await page.getByRole('button', { name: '4', exact: true }).tap();
      const next = grades[index + 1];
      await expect(page.getByRole('radio', { name: grade })).toHaveAccessibleDescription('4 on the shelf');
      await page.getByRole('button', { name: next ? `Next: ${next.grade}` : 'Use these counts' }).tap();
    }
  });
  await test.step('grades are proposed with the prediction and the reasons', async () => {
    const proposal = page.getByRole('region', { name: 'What is proposed' });
    await expect(proposal).toContainText('upper thick, lower thick');
    await expect(proposal).toContainText('0.063 mm');
    await expect(proposal).toContainText('Middle would be 0.069, too near the high limit or above it');
    await expectGood(page);
  });
  await test.step('others are taken with a reason', async () => {
    await page.getByRole('radio', { name: 'middle' }).first().tap({ force: true });
    await expect(page.getByText('not as proposed', { exact: true })).toBeVisible();
    await expectGood(page);
    await page.getByRole('button', { name: 'Say why not as proposed' }).tap();
    await page.getByRole('radio', { name: 'That shell is damaged' }).tap({ force: true });
    await expectGood(page);
    await page.getByRole('button', { name: 'This is why' }).tap();
    await page.getByRole('button', { name: 'Shells chosen' }).tap();
    await expect(page.getByText(/thread laid, cap on/).first()).toBeVisible();
  });
  await test.step('the record has both', async () => {
    await sendAll(page);
    const answer = await judge.api.get(`/api/jobs/${id}/trail`);
    const { body } = (await answer.json()) as {
      body: { entries: { recorded: { kind: string; data: object } }[] };
    };
    expect(
      body.entries.findLast(({ recorded }) => recorded.kind === 'chose-shells')?.recorded.data,
    ).toMatchObject({
      ...{ upper: { grade: 'middle' }, lower: { grade: 'thick' }, predicted: '0.069' },
      ...{ proposed: { upper: 'thick', lower: 'thick' }, reason: 'That shell is damaged' },
      stock: plan.engine.shells.grades.map(({ grade }) => ({ grade, half: 'either', count: 4 })),
    });
  });
});
