import { describe, expect, it } from 'vitest';
import { workshopLines, type WorkshopRecord } from './workshop-words';

const record = (kind: string, data: WorkshopRecord['data'], seq = 1): WorkshopRecord => ({
  ...{ seq, kind, data, by: 'p1', author: { name: 'Odile Marsh', roles: ['owner'] } },
  ...{ at: '2031-05-06T07:00:00.000Z', recordedAt: '2031-05-06T07:00:00.000Z', prev: '0'.repeat(64) },
});

const wordsOf = (...entries: WorkshopRecord[]) => workshopLines(entries).map(({ words }) => words);

describe('the workshop’s trail in words', () => {
  it('calls people, tablets and jobs by the names that they had by then', () => {
    expect(
      wordsOf(
        record('person-added', { person: 'p2', name: 'Ines Vale', roles: ['technician'] }),
        record('tablet-enrolled', { tablet: 't1', name: 'Bay 1' }, 2),
        record('key-enrolled', { key: 'ab12', publicKey: 'k', person: 'p2', tablet: 't1' }, 3),
        record('tablet-renamed', { tablet: 't1', from: 'Bay 1', to: 'Bay 2' }, 4),
        record('tablet-lost', { tablet: 't1', name: 'Bay 2' }, 5),
        record('roles-changed', { person: 'p2', from: ['technician'], to: ['technician', 'supervisor'] }, 6),
        record('job-opened', { job: 'j1', number: '0147', plan: 'h', content: 'c' }, 7),
        record('head-signed', { trail: 'j1', seq: 40, hash: 'h' }, 8),
        record('document-released', { documentKind: 'engine', document: 't4', revision: 2 }, 9),
        record('document-released', { documentKind: 'procedure', document: 'strip', revision: 1 }, 10),
        record('workshop-key-renewed', { key: 'ab'.repeat(32), before: 'cd'.repeat(32), since: 's' }, 11),
        record('second-units-changed', { shown: 'inch and pound' }, 12),
        record('second-units-changed', { shown: 'none' }, 13),
      ),
    ).toEqual([
      'Ines Vale added as technician',
      'Tablet enrolled: Bay 1',
      'Key ab12 of Ines Vale on Bay 1',
      'Tablet Bay 1 is called Bay 2 from here on',
      'Tablet Bay 2 declared lost',
      'Ines Vale: technician became technician, supervisor',
      'Job 0147 opened',
      'Head signed: job 0147, entry 40',
      'Engine sheet t4, revision 2, released',
      'Procedure strip, revision 1, released',
      'The workshop signs with key abababababababab from here on, vouched for by cdcdcdcdcdcdcdcd, the one before it',
      'The Floor shows inch and pound beside SI from here on',
      'The Floor shows SI alone from here on',
    ]);
  });

  it('says what changed of a tool, and what it was before', () => {
    const from = { name: 'Torque wrench', serial: 'TW-1', rangeHigh: '60', cycleLimit: null };
    const [, , words] = wordsOf(
      record('tool-added', { ...from, tool: 'w1', dueOn: '2031-09-01' }),
      record(
        'calibration-recorded',
        { tool: 'w1', serial: 'TW-1', on: '2031-05-05', dueOn: '2032-05-05' },
        2,
      ),
      record('tool-changed', { tool: 'w1', from, to: { ...from, rangeHigh: '50', cycleLimit: 5000 } }, 3),
    );
    expect(words).toBe('Torque wrench: range high 50, was 60; cycle limit 5000, was none');
  });

  it('says by what somebody signs and until when, and what came of a calibration', () => {
    const certificate = { number: 'T-MT-014', kind: 'master technician' };
    const made = { tool: 'w1', serial: 'TW-1', on: '2031-05-05', dueOn: '2032-05-05', certificate: 'C-1' };
    expect(
      wordsOf(
        record('person-added', { person: 'p2', name: 'Ines Vale', roles: ['supervisor'] }),
        record('authorisation-changed', { person: 'p2', certificate, authorisedUntil: '2031-12-31' }, 2),
        record('authorisation-changed', { person: 'p2', certificate: null, authorisedUntil: null }, 3),
        record('tool-added', { name: 'Wrench', serial: 'TW-1', tool: 'w1', dueOn: null }, 4),
        record('calibration-recorded', { ...made, verdict: 'passed', reasons: [] }, 5),
        record('calibration-recorded', { ...made, verdict: 'failed', reasons: ['one', 'two'] }, 6),
        record('calibration-recorded', { ...made, verdict: 'not judged', reasons: [] }, 7),
      ).filter((_, i) => i !== 0 && i !== 3),
    ).toEqual([
      'Ines Vale: signs by certificate T-MT-014, master technician, until 2031-12-31',
      'Ines Vale: signs without a certificate',
      'Wrench, serial TW-1, calibrated on 2031-05-05: passed, due 2032-05-05, certificate C-1',
      'Wrench, serial TW-1, calibrated on 2031-05-05: failed, one; two, certificate C-1',
      'Wrench, serial TW-1, calibrated on 2031-05-05, due 2032-05-05, certificate C-1',
    ]);
  });

  it('has words for whatever it does not know, and never fails on it', () => {
    expect(wordsOf(record('something-new', {}), record('tool-changed', { tool: 7, from: null }, 2))).toEqual([
      'something-new',
      '7: ',
    ]);
  });
});
