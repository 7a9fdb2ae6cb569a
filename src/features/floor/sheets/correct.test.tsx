import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import { parseEntry } from '@/domain/entry';
import {
  FixtureRun,
  supervisor,
  workshopRow,
  type FixtureOptions,
} from '../../../../tests/support/floor-run';
import { Journal } from '../../../../tests/support/journal';
import { smallPlan } from '../../../../tests/support/small-documents';
import { correctableOn, fieldsOf } from './correct-fields';
import { CorrectSheet } from './CorrectSheet';

const GAUGE = 'strip.gauge@rod2';
const sheet = () => within(screen.getByRole('dialog'));
const main = () => document.querySelector<HTMLElement>('dialog .main-action')!;

function open(journal: Journal, step: string, over: Partial<FixtureOptions> = {}) {
  const onClose = vi.fn();
  const shown = journal.step(step);
  render(
    <FixtureRun
      journal={journal}
      start={{ step, isVisit: true }}
      over={() => <CorrectSheet step={shown} onClose={onClose} />}
      {...over}
    />,
  );
  return { onClose, user: userEvent.setup() };
}

const afterGauge = () => new Journal(smallPlan()).performUntil('strip.clean@rod2');

describe('correcting a record', () => {
  it('shows the old value and the new one, and records both with the reason', async () => {
    const journal = afterGauge();
    const { user, onClose } = open(journal, GAUGE);
    await user.click(sheet().getByRole('button', { name: /^Rod 2, front/ }));
    expect(main()).toHaveTextContent('give the right value');
    await user.click(sheet().getByRole('radio', { name: /^0\.060 mm/ }));
    expect(sheet().getByText(/^Rod 2, front: 0\.048 mm/)).toBeVisible();
    expect(sheet().getByText(/^Rod 2, front: 0\.060 mm/)).toBeVisible();
    expect(main()).toHaveTextContent('give the reason');
    await user.click(sheet().getByRole('button', { name: 'misread' }));
    expect(main()).toHaveTextContent('the record keeps both');
    await user.click(main());
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'corrected',
      by: 'tech',
      step: GAUGE,
      data: { class: 'substantive', reason: 'misread', data: { clearance: '0.060', end: 'front' } },
    });
    expect(onClose).toHaveBeenCalledOnce();
  });

  it('of a value with an open deviation says that it stays open, and why', async () => {
    const journal = new Journal(smallPlan()).performUntil(GAUGE).gauge(GAUGE, '0.048', '0.060');
    expect(journal.state.deviations.some(({ blocks }) => blocks)).toBe(true);
    const { user } = open(journal, GAUGE);
    await user.click(sheet().getByRole('button', { name: /^Rod 2, rear/ }));
    await user.click(sheet().getByRole('radio', { name: /^0\.050 mm/ }));
    await user.click(sheet().getByRole('button', { name: 'misread' }));
    expect(main()).toHaveTextContent('the deviation stays open until someone else countersigns');
    await user.click(main());
    expect(screen.getByText(/countersigns that on the page of the job/)).toBeVisible();
  });

  it('of another’s work is for a supervisor, with the author shown', async () => {
    const journal = afterGauge();
    const mate = { id: 'mate', name: 'M. Ate', roles: ['technician'] };
    const { user } = open(journal, GAUGE, { person: mate });
    const line = sheet().getByRole('button', { name: /^Rod 2, front/ });
    expect(line).toHaveAccessibleDescription(/T. Nician corrects it, or a supervisor/);
    await user.click(line);
    expect(main()).toBeNull();
  });

  it('by a supervisor names the author and who corrects', async () => {
    const { user } = open(afterGauge(), GAUGE, { person: supervisor });
    await user.click(sheet().getByRole('button', { name: /^Rod 2, front/ }));
    expect(sheet().getByText(/^Recorded by T. Nician/)).toBeVisible();
    expect(sheet().getByText(/^Corrected by S. Visor/)).toBeVisible();
  });

  it('says before the touch that a hold point opens again, or that someone countersigns', async () => {
    const journal = new Journal(smallPlan()).performUntil('build.clear-to-close');
    const step = 'build.tighten@rod2';
    const { user } = open(journal, step);
    await user.click(sheet().getAllByRole('button', { name: /^Bolt 2B turned/ })[0]!);
    for (const key of ['1', '4', '0']) await user.click(sheet().getByRole('button', { name: key }));
    expect(sheet().getByText(/turned too far/)).toBeVisible();
    await user.click(sheet().getByRole('button', { name: 'typed wrong' }));
    expect(main()).toHaveTextContent('the hold point opens again');
    await user.click(main());
    expect(journal.state.signatures[0]?.reopened).toBeDefined();
    expect(journal.state.deviations.at(-1)).toMatchObject({ rule: 'corrected-outside' });
  });

  it('of the old shells is made by the brush that graded them', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.grade');
    journal.grade('strip.grade', { '2U': { grade: 3 } });
    const { user, onClose } = open(journal, 'strip.grade');
    expect(main()).toHaveTextContent('that is what stands there');
    await user.click(sheet().getByRole('button', { name: /^2 worn/ }));
    await user.click(sheet().getByRole('button', { name: /^2U,/ }));
    expect(sheet().getByText(/2U worn to the next layer$/)).toBeVisible();
    expect(sheet().getByText(/2U copper showing$/)).toBeVisible();
    await user.click(sheet().getByRole('button', { name: 'wrong one touched' }));
    await user.click(main());
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'corrected',
      data: { class: 'substantive', reason: 'wrong one touched' },
    });
    expect(journal.state.deviations.at(-1)?.words).toMatch(/2U copper showing \(since corrected\)$/);
    expect(onClose).toHaveBeenCalledOnce();
  });

  it('stays open with the words when the rules refuse', async () => {
    const journal = afterGauge();
    const { user, onClose } = open(journal, GAUGE);
    await user.click(sheet().getByRole('button', { name: /^Rod 2, rear/ }));
    await user.click(sheet().getByRole('radio', { name: /^0\.060 mm/ }));
    await user.click(sheet().getByRole('button', { name: 'misread' }));
    journal.workshop.people[0]!.active = false;
    await user.click(main());
    expect(sheet().getByRole('alert')).toHaveTextContent(/Not recorded\..*no longer active/);
    expect(onClose).not.toHaveBeenCalled();
  });
});

describe('the values that can be corrected', () => {
  it('always make an entry of the same form, on every step of a whole job', () => {
    const journal = new Journal(smallPlan()).performUntil('build.hand-over');
    const workshop = workshopRow(journal);
    const kinds = new Set<string>();
    for (const step of journal.plan.steps) {
      for (const kept of correctableOn(journal.state, step)) {
        for (const field of fieldsOf(journal.state, workshop, kept)) {
          kinds.add(`${kept.kind}.${field.how}`);
          const value =
            field.how === 'choice' ? field.choices!.at(-1)!.value : field.how === 'lot' ? 'X-9' : '12';
          const data = field.with(value);
          if (data === undefined) continue;
          const entry = { ...journal.entries[1]!, kind: kept.kind, step: kept.step, data };
          expect(parseEntry(entry), `${kept.kind}: ${field.label}`).toMatchObject({ ok: true });
        }
      }
    }
    expect([...kinds].sort()).toEqual(
      expect.arrayContaining([
        'chose-shells.choice',
        'counted.integer',
        'drive-ended.decimal',
        'filled.decimal',
        'fitted.lot',
        'gauged.choice',
        'inspected.choice',
        'read.decimal',
        'refitted.lot',
        'tightened.choice',
        'tightened.decimal',
      ]),
    );
  });
});
