/* What entries of a trail say about one another: a correction and what it corrects, both ways. */
import type { Entry, Recorded } from '@/domain/entry';
import { wordsOf } from '@/domain/entry-words';
import { dayAndTime } from '@/domain/time-words';
import type { ReadTrail } from './read-trail';

/** One entry that has to do with the one looked at. */
export interface Related {
  /** The other entry, to go to. */
  seq: number;
  /** As "Corrected by entry 31". */
  title: string;
  before?: string | undefined;
  after?: string | undefined;
  who: string;
  when: string;
  why?: string | undefined;
}

const ABOUT = {
  corrected: ['Corrected by', 'Corrects'],
  'taken-back': ['Taken back by', 'Takes back'],
  revoked: ['Revoked by', 'Revokes'],
  countersigned: ['Countersigned by', 'Countersigns'],
} as const;

type About = Extract<Recorded, { kind: keyof typeof ABOUT }>;

/** The entries that say something about this one, in order, and the one that it says something about. */
export function relatedTo({ entries, plans }: ReadTrail, seq: number, zone: string): Related[] {
  const all = entries.map(({ recorded }) => recorded);
  const entry = all[seq - 1];
  if (!entry) return [];
  const about = all.filter(isAbout);
  const words = (one: Recorded, data: unknown = one.data): string => {
    const plan = plans.get(one.plan);
    // A correction's data has the form of what it corrects, or the server would have refused it.
    return plan ? wordsOf({ ...one, data } as Entry, plan) : one.kind;
  };
  /** What the entry said before and after its nth correction. */
  const change = (target: Recorded, correction: About): Pick<Related, 'before' | 'after'> => {
    if (correction.kind !== 'corrected') return {};
    const earlier = about.findLast(
      (one) => one.kind === 'corrected' && one.data.of === target.id && one.seq < correction.seq,
    );
    return {
      before: words(target, earlier?.kind === 'corrected' ? earlier.data.data : target.data),
      after: words(target, correction.data.data),
    };
  };
  const backward = about
    .filter(({ data }) => data.of === entry.id)
    .map((one) => ({
      ...described(one, zone),
      seq: one.seq,
      title: `${ABOUT[one.kind][0]} entry ${one.seq}`,
      ...change(entry, one),
    }));
  const own = isAbout(entry) ? entry : undefined;
  const target = own && all.find(({ id }) => id === own.data.of);
  if (!own || !target) return backward;
  const forward = {
    ...described(own, zone),
    seq: target.seq,
    title: `${ABOUT[own.kind][1]} entry ${target.seq}`,
    ...(own.kind === 'corrected' ? change(target, own) : { before: words(target) }),
  };
  return [forward, ...backward];
}

function isAbout(recorded: Recorded): recorded is About {
  return Object.hasOwn(ABOUT, recorded.kind);
}

function described(one: About, zone: string): Pick<Related, 'who' | 'when' | 'why'> {
  const why = 'reason' in one.data ? one.data.reason : undefined;
  return { who: one.author.name, when: dayAndTime(one.at, zone), why };
}
