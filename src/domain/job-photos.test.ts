import { describe, expect, it } from 'vitest';
import { Journal } from '../../tests/support/journal';
import { smallPlan } from '../../tests/support/small-documents';
import { photoName, photosMissing } from './job-photos';

const hashes = { first: 'a'.repeat(64), again: 'c'.repeat(64) };

function photograph(journal: Journal, photo: string, subject = 'arrival', step = 'strip.arrival') {
  const data = { photo, bytes: 10, type: 'image/jpeg', from: 'camera here', subject } as const;
  return journal.record('photographed', data, { step });
}

const missing = (journal: Journal, there: string[] = []) =>
  photosMissing(journal.state, (hash) => there.includes(hash)).map(({ hash }) => hash);

describe('the photographs that a handover waits for', () => {
  it('are those whose bytes are not there', () => {
    const journal = new Journal(smallPlan());
    photograph(journal, hashes.first);
    expect(missing(journal)).toEqual([hashes.first]);
    expect(missing(journal, [hashes.first])).toEqual([]);
  });

  it('are not those that were taken again, once that one is there', () => {
    const journal = new Journal(smallPlan());
    photograph(journal, hashes.first);
    photograph(journal, hashes.again);
    expect(missing(journal)).toEqual([hashes.first, hashes.again]);
    expect(missing(journal, [hashes.again])).toEqual([]);
    expect(missing(journal, [hashes.first]), 'an earlier one stands for no later one').toEqual([
      hashes.again,
    ]);
  });

  it('are still those of which only something else was photographed', () => {
    const journal = new Journal(smallPlan());
    photograph(journal, hashes.first);
    photograph(journal, hashes.again, 'a thumb');
    expect(missing(journal, [hashes.again])).toEqual([hashes.first]);
  });

  it('are not those that were taken back', () => {
    const journal = new Journal(smallPlan());
    const { id } = photograph(journal, hashes.first);
    journal.record('taken-back', { of: id, which: 'touched by mistake, not done' });
    expect(missing(journal)).toEqual([]);
  });

  it('are not those that a deviation names which was disposed of', () => {
    const journal = new Journal(smallPlan());
    photograph(journal, hashes.first);
    const dispose = (words: string) => {
      const { id } = journal.record('deviation-raised', { class: 'C', words, blocks: true });
      const data = { deviation: id, disposition: 'accept as is', reason: 'r' } as const;
      return () => journal.record('deviation-disposed', data, { by: 'sup' });
    };
    dispose('something else')();
    expect(missing(journal)).toEqual([hashes.first]);
    const disposeIt = dispose(`Lost: P${photoName(hashes.first).slice(1)}, the tablet fell`);
    expect(missing(journal), 'raised, not disposed of').toEqual([hashes.first]);
    const disposed = disposeIt();
    expect(missing(journal)).toEqual([]);
    journal.record('revoked', { of: disposed.id, reason: 'it may be found' }, { by: 'sup' });
    expect(missing(journal), 'revoked').toEqual([hashes.first]);
  });
});
