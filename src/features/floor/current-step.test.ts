import { describe, expect, it } from 'vitest';
import { Journal } from '../../../tests/support/journal';
import { smallPlan } from '../../../tests/support/small-documents';
import { currentStep, following, NOWHERE, openWitnessPoints, staysAfter } from './current-step';

const at = (step: string) => new Journal(smallPlan()).performUntil(step);

describe('the step on the screen', () => {
  it('is the first that can be done', () => {
    expect(currentStep(at('strip.raise').state, NOWHERE)?.id).toBe('strip.raise');
  });

  it('is the one that the technician went to, whatever its state', () => {
    const { state } = at('strip.raise');
    expect(currentStep(state, { step: 'strip.arrival', isVisit: true })?.id).toBe('strip.arrival');
    expect(currentStep(state, { step: 'build.turns', isVisit: true })?.id).toBe('build.turns');
  });

  it('is no longer the kept one once that is done', () => {
    expect(currentStep(at('strip.strap').state, { step: 'strip.raise', isVisit: false })?.id).toBe(
      'strip.strap',
    );
  });

  it('never is a witness point, which is an invitation', () => {
    const { state } = at('strip.turn-to@stop1');
    expect(openWitnessPoints(state).map(({ id }) => id)).toEqual(['strip.look']);
    expect(currentStep(state, NOWHERE)?.id).toBe('strip.turn-to@stop1');
  });

  it('goes on in the section that the technician chose', () => {
    const journal = new Journal(smallPlan());
    journal.perform('strip.old-shell-kit');
    expect(following(journal.state, journal.step('strip.old-shell-kit'))?.id).toBe('strip.rags-out');
  });

  it('is the resumption while the job is parked', () => {
    const journal = at('strip.raise');
    journal.perform('strip.park');
    expect(currentStep(journal.state, NOWHERE)?.id).toBe('strip.resume');
  });

  it('moves on from what is done and inside, and stays where a deviation waits', () => {
    const journal = at('strip.strap');
    expect(staysAfter(journal.state, journal.step('strip.raise'))).toBe(false);
    const measured = at('strip.clean@rod1');
    expect(staysAfter(measured.state, measured.step('strip.gauge@rod1'))).toBe(false);
    const outside = at('strip.gauge@rod1').gauge('strip.gauge@rod1', '0.048', '0.200');
    expect(staysAfter(outside.state, outside.step('strip.gauge@rod1'))).toBe(true);
  });

  it('stays after a road test only where it was shorter than asked', () => {
    const driven = (odometer: string) => {
      const journal = at('build.drive');
      journal.record('drive-started', { odometer: '1000', unit: 'km', checks: [] }, { step: 'build.drive' });
      journal.record('drive-ended', { odometer, unit: 'km', checks: [] }, { step: 'build.drive' });
      return staysAfter(journal.state, journal.step('build.drive'));
    };
    expect(driven('1004')).toBe(true);
    expect(driven('1100')).toBe(false);
  });
});
