import type { TrailBody, TrailExport } from '@/domain/trail-export';
import { chainAgain, type Change, forged, replaceAuthorKey, resealed } from './trail-changes';

/*
 * What somebody who wants another record would change in a trail, and put right again as far as it goes without
 * the keys of the workshop and of its people.
 */

const isAuthors = ({ signature }: TrailBody['entries'][number]) => signature !== null;

/** Changes of entries that are picked at random. */
export function recordChanges(file: Buffer, next: () => number): Change[] {
  const { body } = JSON.parse(file.toString()) as TrailExport;
  const pick = (test: (at: number) => boolean): number => {
    for (;;) {
      const at = Math.floor(next() * (body.entries.length - 2)) + 1;
      if (test(at)) return at;
    }
  };
  const entry = (at: number) => body.entries[at]!;
  const jobHeads = body.heads.filter(({ trail }) => trail === body.job.id).map(({ seq }) => seq);
  const firstHeadFrom = (seq: number) => Math.min(...jobHeads.filter((head) => head >= seq));
  return Array.from({ length: 4 }, () => {
    const value = pick((at) => isAuthors(entry(at)));
    const taken = pick(() => true);
    const two = pick((at) => isAuthors(entry(at)) && isAuthors(entry(at + 1)));
    const swap = (to: TrailBody) => to.entries.splice(two, 2, to.entries[two + 1]!, to.entries[two]!);
    return [
      {
        name: `what entry ${value + 1} says, all forged but its author’s signature`,
        text: forged(file, (to) => {
          to.entries[value]!.recorded.data = { ...entry(value).recorded.data, note: 'all in order' };
          chainAgain(to);
        }),
        place: `entry ${value + 1}`,
      },
      {
        name: `entry ${taken + 1} removed`,
        text: resealed(file, (to) => to.entries.splice(taken, 1)),
        place: `entry ${taken + 1}`,
      },
      {
        name: `entry ${taken + 1} removed and the rest chained again, under the workshop’s heads`,
        text: resealed(file, (to) => {
          to.entries.splice(taken, 1);
          chainAgain(to);
        }),
        place: `the head at entry ${firstHeadFrom(taken + 1)}`,
      },
      {
        name: `entries ${two + 1} and ${two + 2} swapped`,
        text: resealed(file, swap),
        place: `entry ${two + 1}`,
      },
      {
        name: `entries ${two + 1} and ${two + 2} swapped, all forged but the tablet’s numbers`,
        text: forged(file, (to) => {
          swap(to);
          chainAgain(to);
        }),
        place: `entry ${two + 2}`,
      },
    ];
  }).flat();
}

/** Changes of which there is one place each. */
export function fixedChanges(file: Buffer): Change[] {
  const { body } = JSON.parse(file.toString()) as TrailExport;
  const [head] = body.heads;
  const [photo] = body.photographs;
  const [authorKey] = body.keys;
  const { key } = body.workshopKeys.at(-1)!;
  const last = body.entries.at(-1)!;
  const cut = forged(file, (to) => to.entries.splice(-3));
  let replaced = '';
  const keyReplaced = forged(file, (to) => {
    replaced = replaceAuthorKey(to, authorKey!.id);
  });
  const headAt = `the head at entry ${head!.seq}`;
  const photoAt = `photograph ${photo!.hash}`;
  const customerAt = 'identity: customerName';
  const withHead = (change: Partial<TrailBody['heads'][number]>) =>
    resealed(file, (to) => Object.assign(to.heads[0]!, change));
  const withIdentity = (change: (to: TrailBody['identity']) => unknown) =>
    forged(file, (to) => change(to.identity));
  const withPhoto = (change: Partial<TrailBody['photographs'][number]>) =>
    forged(file, (to) => Object.assign(to.photographs[0]!, change));
  return [
    { name: 'the tail cut, all forged: the file alone is whole', text: cut, isWhole: true },
    { name: 'the tail cut, against a head', text: cut, head: last.hash, place: 'the head that you hold' },
    { name: 'the tail cut, against the key', text: cut, key, place: "the workshop's key" },
    {
      name: 'a head moved to another entry',
      text: withHead({ seq: head!.seq - 1 }),
      place: `the head at entry ${head!.seq - 1}`,
    },
    { name: 'a head with another hash', text: withHead({ hash: body.entries[0]!.hash }), place: headAt },
    { name: 'a head at another time', text: withHead({ at: '2031-01-01T00:00:00.000Z' }), place: headAt },
    { name: 'a head by another key', text: withHead({ key: 'ab'.repeat(32) }), place: headAt },
    { name: 'a head with another signature', text: withHead({ signature: 'A'.repeat(86) }), place: headAt },
    { name: 'an author’s key replaced, and all forged', text: keyReplaced, place: `key ${replaced}` },
    {
      name: 'the customer’s name',
      text: withIdentity((to) => Object.assign(to.customerName!, { value: 'Bea Testperson' })),
      place: customerAt,
    },
    {
      name: 'the salt of the customer’s name',
      text: withIdentity((to) => Object.assign(to.customerName!, { salt: '0f'.repeat(16) })),
      place: customerAt,
    },
    {
      name: 'the customer’s name said to be erased',
      text: withIdentity((to) => Object.assign(to, { customerName: 'erased' })),
      place: customerAt,
    },
    {
      name: 'the customer’s name left out',
      text: withIdentity((to) => delete to.customerName),
      place: customerAt,
    },
    {
      name: 'a field of the customer that was never there',
      text: withIdentity((to) => Object.assign(to, { approver: 'withheld' })),
      place: 'identity: approver',
    },
    { name: 'the size of a photograph', text: withPhoto({ bytes: photo!.bytes + 1 }), place: photoAt },
    { name: 'a photograph said to be erased', text: withPhoto({ state: 'erased' }), place: photoAt },
    {
      name: 'another photograph',
      text: withPhoto({ hash: 'cd'.repeat(32) }),
      place: `photograph ${'cd'.repeat(32)}`,
    },
    { name: 'a photograph left out', text: forged(file, (to) => to.photographs.shift()), place: photoAt },
    {
      name: 'nothing, sealed with a key that is not the workshop’s',
      text: resealed(file, () => undefined),
      place: "the export's signature",
    },
  ];
}
