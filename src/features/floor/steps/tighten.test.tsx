import { act, fireEvent, render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import { FixtureRun } from '../../../../tests/support/floor-run';
import { angleTool, Journal, torqueTool } from '../../../../tests/support/journal';
import { smallPlan } from '../../../../tests/support/small-documents';
import type { SheetName } from '../run-context';
import { nextTouch } from '../tighten-touch';

const STEP = 'build.tighten@rod1';

/** A cap on its final fit after so many single actions, with both tools in hand. */
function runCap(actions = 0, { ask = false, tools = true, workshop = {} } = {}) {
  const journal = new Journal(smallPlan()).performUntil(STEP);
  Object.assign(journal.workshop, workshop);
  if (tools) {
    journal.record('tool-taken', { use: 'torque', tool: torqueTool });
    journal.record('tool-taken', { use: 'angle', tool: angleTool });
  }
  for (let i = 0; i < actions; i += 1) journal.tightenOnce(STEP);
  const step = journal.step(STEP);
  const touch = step.kind === 'tighten' ? nextTouch(journal.state, step) : null;
  const onSheet = vi.fn<(name: SheetName) => void>();
  render(
    <FixtureRun
      journal={journal}
      start={{ step: STEP, isVisit: false }}
      onSheet={onSheet}
      {...(ask && touch ? { askAbout: touch.key } : {})}
    />,
  );
  const count = journal.entries.length;
  return { journal, onSheet, user: userEvent.setup(), made: () => journal.entries.slice(count) };
}

const press = (name: RegExp) => userEvent.setup().click(screen.getByRole('button', { name }));
const main = () => document.querySelector<HTMLElement>('.main-action')!;

async function key(digits: string) {
  for (const digit of digits) await userEvent.setup().click(screen.getByRole('button', { name: digit }));
}

/** Holds a button as long as it asks for. */
function hold(name: RegExp) {
  vi.useFakeTimers();
  const button = screen.getByRole('button', { name });
  fireEvent.pointerDown(button, { isPrimary: true, button: 0 });
  act(() => void vi.advanceTimersByTime(1300));
  vi.useRealTimers();
}

describe('the tightening programme', () => {
  it('shows the torque in pounds beside SI where the shop wants that, and never an angle', () => {
    runCap(0, { workshop: { secondUnits: 'inch and pound' } });
    expect(screen.getByRole('heading', { level: 1 })).toHaveTextContent(/10 N·m 7\.4 lbf·ft$/);
  });

  it('shows SI alone where the shop has not chosen', () => {
    runCap();
    expect(screen.getByRole('heading', { level: 1 })).toHaveTextContent(/10 N·m$/);
  });

  it('asks for the tool before the first pass of class A, and for nothing else', async () => {
    const { onSheet, made } = runCap(0, { tools: false });
    expect(main()).toHaveTextContent('touch the one in your hand');
    await press(/^All tools/);
    expect(onSheet).toHaveBeenCalledWith('torque tool');
    expect(made()).toEqual([]);
    await userEvent.setup().click(screen.getByRole('radio', { name: torqueTool.name }));
    expect(made()).toMatchObject([{ kind: 'tool-taken', data: { use: 'torque', tool: torqueTool } }]);
    await press(/^Both at /);
    expect(made().at(-1)).toMatchObject({ kind: 'tightened', data: { tool: { serial: torqueTool.serial } } });
  });

  it('records a lower torque pass on both bolts at one touch, each with its tool', async () => {
    const { journal, made } = runCap();
    const lowerPasses = journal.plan.programmes.rodCap!.cycles[0]!.filter(
      ({ kind }) => kind === 'torque',
    ).length;
    expect(lowerPasses).toBeGreaterThan(0);
    await press(/^Both at /);
    expect(made().map(({ data }) => data)).toMatchObject([
      { bolt: '1A', cycle: 0, stage: 0, how: 'confirmed', tool: { serial: 'TW-1' } },
      { bolt: '1B', cycle: 0, stage: 0, how: 'confirmed', tool: { serial: 'TW-1' } },
    ]);
    expect(made()[0]!.at).toBe(made()[1]!.at);
  });

  it('records an angle one bolt a touch, with bolt and angle equally loud', async () => {
    const { journal, made } = runCap();
    while (main().textContent.startsWith('Both at')) await press(/^Both at /);
    expect(screen.getByText('turn through')).toBeVisible();
    expect(document.querySelector('.loud-name')).toHaveTextContent('1A');
    await press(/^Turned /);
    expect(made().at(-1)).toMatchObject({
      kind: 'tightened',
      data: { bolt: '1A', target: { kind: 'angle' } },
    });
    expect(document.querySelector('.loud-name')).toHaveTextContent('1B');
    expect(journal.state.bolts['1A']?.cyclesDone).toBe(1);
  });

  it('releases the cap at one touch and marks each bolt after its last angle', async () => {
    const { journal } = runCap();
    const labels: string[] = [];
    for (let guard = 0; guard < 40 && journal.status(STEP) !== 'done'; guard += 1) {
      labels.push(main().querySelector('.main-action-label')!.textContent);
      await press(/^(Both|Turned|Marked|Tightened)/);
    }
    expect(journal.status(STEP)).toBe('done');
    expect(labels.filter((label) => label === 'Both released')).toHaveLength(1);
    expect(labels.slice(-4).map((label) => label.replace(/\d+°/, 'N°'))).toEqual([
      'Turned N°',
      'Marked 1A',
      'Turned N°',
      'Marked 1B',
    ]);
  });

  it('keeps a reading that was typed as typed', async () => {
    const { made } = runCap(2);
    await press(/^Enter (angle|torque)/);
    await screen.findByText(/asked: /);
    const step = made();
    expect(step).toEqual([]);
    const target = /asked: (\d+)/.exec(document.body.textContent)![1]!;
    await key(target);
    await press(/^Keep /);
    expect(made().at(-1)).toMatchObject({ data: { how: 'typed', value: target, outcome: 'done' } });
  });

  it('goes on to the figure when it stopped short', async () => {
    const { made } = runCap(2);
    await press(/^Enter/);
    await screen.findByText(/asked: /);
    await key('1');
    expect(screen.getByText('Short')).toBeVisible();
    await press(/^Went on to/);
    expect(made().at(-1)).toMatchObject({ data: { value: '1', outcome: 'short and continued' } });
  });

  it('condemns an overturned bolt only by holding, lets its partner off, and starts again with a new one', async () => {
    const { journal, made } = runCap(3);
    await press(/^Enter/);
    await screen.findByText(/asked: /);
    await key('999');
    expect(screen.getByText('Too far')).toBeVisible();
    await press(/^Condemn 1B/);
    expect(made()).toEqual([]);
    hold(/^Condemn 1B/);
    expect(await screen.findByText(/its partner was turned too far/)).toBeVisible();
    await press(/^Released 1A/);
    expect(await screen.findByText(/Turned too far: the bolt is scrap/)).toBeVisible();
    expect(main()).toHaveTextContent('the lot of the new bolt is needed');
    await key('B2');
    await press(/^Replaced 1B/);
    expect(made().map(({ kind }) => kind)).toEqual(['tightened', 'released', 'bolt-replaced']);
    expect(journal.state.bolts['1B']).toMatchObject({ replaced: 1, lot: 'B2' });
    // Its partner had one tightening already and can't last through the programme a second time.
    await key('B2');
    await press(/^Replaced 1A/);
    expect(screen.getByRole('button', { name: /^Both at/ })).toBeVisible();
  });
});

describe('on coming back', () => {
  it('asks whether it was turned instead of offering the action', async () => {
    const { made } = runCap(2, { ask: true });
    expect(screen.getByText(/^was it (turned|tightened)\?/)).toBeVisible();
    expect(main()).toHaveAttribute('aria-disabled', 'true');
    await press(/^Yes$/);
    expect(made()).toMatchObject([{ kind: 'tightened', data: { bolt: '1A', how: 'confirmed' } }]);
  });

  it('offers the action again after No', async () => {
    const { made } = runCap(2, { ask: true });
    await press(/^No$/);
    expect(screen.queryByText(/^was it/)).toBeNull();
    expect(made()).toEqual([]);
  });

  it('lets both bolts off after Not sure, and replaces those that cannot last again', async () => {
    const { journal, made } = runCap(2, { ask: true });
    await press(/^Not sure$/);
    expect(made()).toMatchObject([{ kind: 'started-again', data: { bolts: ['1A', '1B'] } }]);
    expect(screen.getByText(/It can’t be tightened often enough again/)).toBeVisible();
    for (const bolt of ['1A', '1B']) {
      await key('B3');
      await press(new RegExp(`^Replaced ${bolt}`));
    }
    expect(journal.state.bolts['1A']).toMatchObject({ replaced: 1, used: { new: 0 } });
    expect(screen.getByRole('button', { name: /^Both at/ })).toBeVisible();
  });
});
