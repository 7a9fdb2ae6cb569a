import { describe, expect, it } from 'vitest';
import { emptyJob } from '@/domain/job';
import { smallPlan } from '../../../tests/support/small-documents';
import { knownLots, shellLots } from './known-lots';

const stateWith = (lots: Record<string, string[]>) => ({ ...emptyJob(smallPlan()), lots });

describe('lots from the kit check', () => {
  it('offers a part its own lots', () => {
    expect(knownLots(stateWith({ 'Rod bolts, new': ['B-1'] }), 'Rod bolts, new')).toEqual(['B-1']);
  });

  it('never lends a part the lot of one that is only alike', () => {
    const state = stateWith({ 'Big-end shells, grade red': ['S-1'], 'Rod bolts, new': ['B-1'] });
    expect(knownLots(state, 'Big-end shells, grade blue')).toEqual([]);
    expect(knownLots(state, 'Underside bolt kit')).toEqual([]);
  });

  it('finds a part by the words that all stand in its name', () => {
    const state = stateWith({ 'Gauging thread with its card, fine': ['G-1'], 'Underside bolt kit': ['U-1'] });
    expect(knownLots(state, 'gauging thread')).toEqual(['G-1']);
    expect(knownLots(state, 'rod bolts')).toEqual([]);
  });

  it('keeps the lots of shell grades apart', () => {
    const state = stateWith({ 'Big-end shells, grade red': ['S-1'], 'Big-end shells, grade blue': ['S-2'] });
    expect(shellLots(state, 'red')).toEqual(['S-1']);
    expect(shellLots(state, 'black')).toEqual([]);
    expect(shellLots(stateWith({ shells: ['S-9'] }), 'black')).toEqual(['S-9']);
  });
});
