import { describe, expect, it } from 'vitest';
import { Journal } from '../../tests/support/journal';
import { smallPlan } from '../../tests/support/small-documents';
import { applyEntry, emptyJob } from './job';
import { beginFolding, endFolding } from './job-tables';

const journal = new Journal(smallPlan()).performUntil(null);
const half = journal.entries
  .slice(0, Math.floor(journal.entries.length / 2))
  .reduce(applyEntry, emptyJob(journal.plan));
const rest = journal.entries.slice(Math.floor(journal.entries.length / 2));

describe('folding many entries in one go', () => {
  it('ends in the same state as one entry at a time', () => {
    expect(endFolding(rest.reduce(applyEntry, beginFolding(half)))).toEqual(journal.state);
  });

  it('changes nothing of the state that it began with', () => {
    const before = structuredClone(half);
    rest.reduce(applyEntry, beginFolding(half));
    expect(half).toEqual(before);
  });

  it('gives out a state that later entries leave alone', () => {
    const [next, ...later] = rest;
    const given = endFolding(applyEntry(beginFolding(half), next!));
    const before = structuredClone(given);
    later.reduce(applyEntry, beginFolding(given));
    later.reduce(applyEntry, given);
    expect(given).toEqual(before);
    expect(Object.getOwnPropertySymbols(given)).toEqual([]);
  });
});
