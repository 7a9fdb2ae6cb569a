import type { Entry, EntryData } from '@/domain/entry';
import type { JobState } from '@/domain/job-state';
import { GET as getJob } from '@/pages/api/jobs/[id]/index';
import type { EntryVerdict } from '@/server/sync-body';
import type { ScriptedEntry } from '@db/scripted-work';
import {
  ask,
  enrolTestTablet,
  type Hand,
  type OpenedJob,
  openShop,
  openTestJob,
  setClocks,
  type Shop,
  type TestTablet,
  trailOf,
} from './tablet';

/** A workshop with one job on one tablet that everybody of it has a key on, and what is asked of them. */
export class Bay {
  private constructor(
    readonly shop: Shop,
    readonly tablet: TestTablet,
    readonly job: OpenedJob,
  ) {}

  static async open(): Promise<Bay> {
    const shop = await openShop();
    const { supervisor, lead, ann, ben, owner } = shop.people;
    const tablet = await enrolTestTablet(shop, [supervisor, lead, ann, ben, owner]);
    return new Bay(shop, tablet, await openTestJob(tablet, supervisor));
  }

  /** Ann's work up to a step; who judges disposes of what needs it and signs what comes before. */
  async workTo(step: string, judge: Hand = this.shop.people.supervisor): Promise<void> {
    const { tablet, shop, job } = this;
    await tablet.perform(job.id, { technician: shop.people.ann, supervisor: judge }, shop.kit, { step });
    setClocks(tablet);
    await tablet.sync();
  }

  /** What the server says to the last of what is sent. */
  async last(): Promise<EntryVerdict | undefined> {
    return (await this.tablet.sync()).at(-1);
  }

  /** What the server says to an entry, whatever the tablet thinks of it. */
  async pushed(made: Omit<ScriptedEntry, 'part' | 'afterMs'>, by: Hand): Promise<EntryVerdict | undefined> {
    await this.tablet.record(this.job.id, made, { by, force: true });
    return this.last();
  }

  /** What the server says to a signature, whatever the tablet thinks of it. */
  async pushedSignature(
    hold: string,
    by: Hand,
    change?: (entry: Entry) => Entry,
  ): Promise<EntryVerdict | undefined> {
    await this.tablet.sign(this.job.id, hold, {
      by,
      force: true,
      ...(change === undefined ? {} : { change }),
    });
    return this.last();
  }

  /** The kinds of what the server has recorded, in order. */
  async kinds(): Promise<string[]> {
    return (await trailOf(this.shop.app, this.job.id)).map(({ kind }) => kind);
  }

  /** The job as the server has it. */
  async stateOnServer(): Promise<JobState> {
    const { body } = await ask(getJob, { as: this.shop.people.supervisor, params: { id: this.job.id } });
    return (body as { jobState: JobState }).jobState;
  }
}

/** Changes what a finished entry says before it is signed. */
export const changed =
  (over: object) =>
  (entry: Entry): Entry =>
    ({ ...entry, data: { ...entry.data, ...over } }) as Entry;

/** The rags of the small route, counted in. */
export const ragsIn = (count: number) =>
  ({ kind: 'counted', step: 'build.rags-in', data: { count } }) as const;

/** The handover of the small route. */
export const handOver: { kind: 'handed-over'; step: string; data: EntryData<'handed-over'> } = {
  kind: 'handed-over',
  step: 'build.hand-over',
  data: { checks: [{ id: 'parts', ok: true }] },
};
