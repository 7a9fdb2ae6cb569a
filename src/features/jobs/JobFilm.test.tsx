import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import { estimateFilm } from '@/domain/film-estimate';
import type { JobState } from '@/domain/job-state';
import { Journal } from '../../../tests/support/journal';
import { smallPlan } from '../../../tests/support/small-documents';
import { JobFilm } from './JobFilm';

/** A job whose first rod is gauged, on an engine whose bearing and oil are known. */
function gauged({ bearing = true } = {}): JobState {
  const { state } = new Journal(smallPlan()).performUntil('strip.turn-to@stop2');
  const oil = { title: 'Engine oil', specification: 'Oil class M4, 5W-30', quantity: '6', unit: 'L' };
  return {
    ...state,
    plan: {
      ...state.plan,
      engine: { ...state.plan.engine, ...(bearing ? { bearing: { diameter: '48', width: '20' } } : {}) },
      fluids: { engineOil: oil },
    },
  };
}

const readingOf = ({ rods }: JobState) => Object.values(rods).find(({ front }) => front)!.front!.clearance;

const conditions = { diameter: 48, width: 20, speed: 3000, unitLoad: 6, temperature: 100, grade: '5W-30' };
const column = (name: RegExp) =>
  within(screen.getByRole('heading', { level: 3, name }).closest<HTMLElement>('.job-film-column')!);

describe('what a clearance means', () => {
  it('estimates the film at both limits and at the mean of the readings, and says that it is an estimate', () => {
    const state = gauged();
    render(<JobFilm state={state} />);
    expect(screen.getByText('An estimate, and no limit. Nothing is passed or failed by it.')).toBeVisible();
    const clearance = readingOf(state);
    const made = estimateFilm(Number(clearance), conditions);
    expect(column(/^Mean of 4 readings/).getByText(`${made.film.toFixed(1)} µm`)).toBeVisible();
    expect(column(/^Tight limit/).getByText('Thinnest film')).toBeVisible();
    expect(column(/^Wide limit/).getByText('Oil through it')).toBeVisible();
    expect(screen.getByText(/Tables of Raimondi and Boyd/)).toBeInTheDocument();
  });

  it('follows what is assumed, and says in words what can not be estimated', async () => {
    const state = gauged();
    render(<JobFilm state={state} />);
    const user = userEvent.setup();
    const load = screen.getByRole('textbox', { name: /Load on the shell/, hidden: true });
    await user.clear(load);
    await user.type(load, '2,5');
    const made = estimateFilm(Number(readingOf(state)), { ...conditions, unitLoad: 2.5 });
    expect(column(/^Mean/).getByText(`${made.film.toFixed(1)} µm`)).toBeVisible();
    await user.clear(load);
    expect(column(/^Mean/).getByText(/load must be greater than zero/)).toBeVisible();
    expect(column(/^Mean/).queryByText('Thinnest film')).toBeNull();
  });

  it('is not there where the sheet has no sizes, or nothing is measured', () => {
    const { container, rerender } = render(<JobFilm state={gauged({ bearing: false })} />);
    expect(container).toBeEmptyDOMElement();
    rerender(<JobFilm state={{ ...gauged(), rods: {} }} />);
    expect(container).toBeEmptyDOMElement();
  });
});
