import { beforeEach, describe, expect, it, vi } from 'vitest';
import { nextSteps } from '@/domain/job';
import { readTrail } from '@/features/trail/read-trail';
import { linesOf } from '@/features/trail/trail-lines';
import { GET as getTrail } from '@/pages/api/jobs/[id]/trail';
import { PATCH as patchPerson } from '@/pages/api/people/[id]/index';
import { GET as getPeople } from '@/pages/api/people/index';
import { Bay, changed, handOver, ragsIn } from '../support/bay';
import { shippedPlan } from '../support/shipped-plan';
import { ask, type Hand, setClocks, workshopOf } from '../support/tablet';

/*
 * Who may inspect whose work, and what may not go on until they have: aviation, nuclear and construction rules,
 * one test a line, each with its source and how it was read. What is asked is asked of the running program.
 */

vi.setConfig({ testTimeout: 60_000, hookTimeout: 30_000 });

const HOLD = 'build.caps-marked';

let bay: Bay;

beforeEach(async () => {
  bay = await Bay.open();
});

describe('independent inspection', () => {
  it('SO-121.371c [S, 14 CFR 121.371(c), laws9.com/cfr/text/14/121/371]: who did the work, or helped, inspects it nowhere', async () => {
    const { ann, lead, supervisor } = bay.shop.people;
    await bay.workTo('build.turns', lead);
    const turned = { kind: 'turned', step: 'build.turns', data: { fullTurns: 2 } } as const;
    await bay.tablet.record(bay.job.id, turned, { by: ann, with: [supervisor.id] });
    await expect(bay.tablet.sign(bay.job.id, HOLD, { by: supervisor })).rejects.toThrow(/\(own-work\)/);
    // The tablet may lie; the server judges by the record.
    expect(await bay.pushedSignature(HOLD, supervisor)).toMatchObject({
      verdict: 'refused',
      code: 'own-work',
    });
    expect(await bay.kinds()).not.toContain('signed');
  });

  it('SO-AMC4 [M, AMC4 145.A.48(b), partly from memory]: the same person is refused, and both are on record before release', async () => {
    const { ann, lead, supervisor } = bay.shop.people;
    // The caps of rods 2 and 3 hang at the bottom first.
    await bay.workTo('build.tighten@rod1', lead);
    await bay.tablet.perform(bay.job.id, { technician: supervisor, supervisor: lead }, bay.shop.kit, {
      step: HOLD,
    });
    setClocks(bay.tablet);
    expect(await bay.pushedSignature(HOLD, supervisor)).toMatchObject({
      verdict: 'refused',
      code: 'own-work',
    });
    expect(await bay.pushed(handOver, lead)).toMatchObject({ verdict: 'refused' });

    const second = await anotherSupervisor();
    expect(await bay.pushedSignature(HOLD, second)).toMatchObject({ verdict: 'recorded' });
    const state = await bay.stateOnServer();
    expect(state.phase).toBe('running');
    const signature = state.signatures.find(({ step }) => step === HOLD)!;
    expect(signature).toMatchObject({ by: second.id, name: second.name });
    expect(state.authors['build.tighten@rod2']).toEqual([ann.id]);
    expect(state.authors['build.tighten@rod1']).toContain(supervisor.id);
    expect(Object.values(state.authors).flat()).not.toContain(second.id);
  });

  it('SO-AMC4d [S, AMC4 145.A.48(b)(d), nhaf.no/safety-reinspection]: a second look by the same person needs a reason and is marked on the record', async () => {
    const { lead, supervisor, auditor } = bay.shop.people;
    await bay.workTo('build.turns', lead);
    const turned = { kind: 'turned', step: 'build.turns', data: { fullTurns: 2 } } as const;
    await bay.tablet.record(bay.job.id, turned, { by: supervisor });
    setClocks(bay.tablet);
    const reason = 'nobody else is in the workshop today';
    expect(await bay.pushedSignature(HOLD, supervisor, changed({ notIndependent: reason }))).toMatchObject({
      verdict: 'refused',
      code: 'too-soon',
    });
    bay.tablet.now += 31 * 60_000;
    setClocks(bay.tablet);
    expect(await bay.pushedSignature(HOLD, supervisor)).toMatchObject({
      verdict: 'refused',
      code: 'own-work',
    });
    expect(await bay.pushedSignature(HOLD, supervisor, changed({ notIndependent: '' }))).toMatchObject({
      verdict: 'refused',
    });
    expect(await bay.pushedSignature(HOLD, supervisor, changed({ notIndependent: reason }))).toMatchObject({
      verdict: 'recorded',
    });
    const state = await bay.stateOnServer();
    expect(state.signatures.at(-1)).toMatchObject({ by: supervisor.id, notIndependent: reason });
    const { text } = await ask(getTrail, { as: auditor, params: { id: bay.job.id } });
    const lines = linesOf(readTrail(new TextEncoder().encode(text)), 'Europe/Lisbon');
    expect(lines.at(-1)!.what).toContain(`(not independent: ${reason})`);
  });
});

async function anotherSupervisor(): Promise<Hand> {
  const { owner, ben } = bay.shop.people;
  const roles = ['technician', 'supervisor'];
  const answer = await ask(patchPerson, {
    as: owner,
    params: { id: ben.id },
    body: { roles },
    method: 'PATCH',
  });
  expect(answer.status).toBe(200);
  bay.tablet.workshop = await workshopOf(bay.shop.app);
  return { ...ben, roles: roles as Hand['roles'] };
}

describe('the list of who is authorised', () => {
  it('SO-121.371d [S, 14 CFR 121.371(d), laws9.com/cfr/text/14/121/371]: it is current, says for what, and each change of it is in writing', async () => {
    const { owner, ben, auditor } = bay.shop.people;
    const listed = async () =>
      (
        (await ask(getPeople, { as: auditor })).body as {
          people: { id: string; name: string; roles: string[]; active: boolean }[];
        }
      ).people.find(({ id }) => id === ben.id);
    expect(await listed()).toMatchObject({ name: ben.name, roles: ['technician'], active: true });
    await bay.workTo(HOLD);
    expect(await bay.pushedSignature(HOLD, ben)).toMatchObject({ verdict: 'refused', code: 'role' });
    const second = await anotherSupervisor();
    expect(await listed()).toMatchObject({ roles: ['technician', 'supervisor'] });
    expect(await bay.pushedSignature(HOLD, second)).toMatchObject({ verdict: 'recorded' });

    await ask(patchPerson, { as: owner, params: { id: ben.id }, body: { active: false }, method: 'PATCH' });
    expect(await listed()).toMatchObject({ active: false });
    const rows = await bay.shop.app.db
      .selectFrom('workshop_entry')
      .select(['kind', 'by_person', 'at', 'body'])
      .where('body', 'like', `%"person":"${ben.id}"%`)
      .where('kind', 'in', ['person-added', 'roles-changed', 'person-deactivated'])
      .orderBy('seq')
      .execute();
    expect(rows.map(({ kind }) => kind)).toEqual(['person-added', 'roles-changed', 'person-deactivated']);
    for (const { by_person, at } of rows) {
      expect(by_person).toBe(owner.id);
      expect(at).toMatch(/^2031-05-\d\dT/);
    }
    expect(JSON.parse(rows[1]!.body)).toMatchObject({
      data: { from: ['technician'], to: ['technician', 'supervisor'] },
    });
  });

  it('SO-121.371d [S, the same]: an authorisation has an end, after which nothing is signed until the owner renews it', async () => {
    const { owner, supervisor, auditor } = bay.shop.people;
    const authorise = async (authorisedUntil: string | null) => {
      const certificate = { number: 'T-MT-014', kind: 'master technician' };
      const body = { authorisation: { certificate, authorisedUntil } };
      const params = { id: supervisor.id };
      expect(await ask(patchPerson, { as: supervisor, params, body, method: 'PATCH' })).toMatchObject({
        status: 403,
      });
      expect(await ask(patchPerson, { as: owner, params, body, method: 'PATCH' })).toMatchObject({
        status: 200,
      });
      bay.tablet.workshop = await workshopOf(bay.shop.app);
    };
    await bay.workTo(HOLD);
    // The clock of the tests stands at 6 May 2031.
    await authorise('2031-05-05');
    const { body } = await ask(getPeople, { as: auditor });
    const { people } = body as { people: { id: string; authorisedUntil: string }[] };
    expect(people.find(({ id }) => id === supervisor.id)).toMatchObject({ authorisedUntil: '2031-05-05' });
    await expect(bay.tablet.sign(bay.job.id, HOLD, { by: supervisor })).rejects.toThrow(
      /counted until 5 May 2031.*authorisation-over/,
    );
    // The tablet may lie; the server judges by the workshop's trail.
    expect(await bay.pushedSignature(HOLD, supervisor)).toMatchObject({
      verdict: 'refused',
      code: 'authorisation-over',
    });
    await authorise('2031-05-06');
    expect(await bay.pushedSignature(HOLD, supervisor)).toMatchObject({ verdict: 'recorded' });
    const changes = await bay.shop.app.db
      .selectFrom('workshop_entry')
      .select('by_person')
      .where('kind', '=', 'authorisation-changed')
      .execute();
    expect(changes).toEqual([{ by_person: owner.id }, { by_person: owner.id }]);
  });
});

describe('hold points and witness points', () => {
  it('SO-71.121 [S, 10 CFR 71.121; 10 CFR 50 App. B X says the same, from memory]: work does not go past a hold point without the named role', async () => {
    const { ann, lead, supervisor } = bay.shop.people;
    await bay.workTo(HOLD);
    expect(await bay.pushed(ragsIn(12), ann)).toMatchObject({ verdict: 'refused', code: 'unsigned' });
    expect(await bay.pushedSignature(HOLD, lead)).toMatchObject({ verdict: 'refused', code: 'role' });
    expect(await bay.pushedSignature(HOLD, supervisor)).toMatchObject({ verdict: 'recorded' });
    expect(await bay.pushed(ragsIn(12), ann)).toMatchObject({ verdict: 'recorded' });
  });

  it.each(['merrow-s6-rod-bearings', 'corvane-v8-rod-bearings'] as const)(
    'SO-71.121 [S, 10 CFR 71.121]: the documents show each hold point and who releases it (%s)',
    (route) => {
      const holds = shippedPlan(route).steps.flatMap((step) => (step.kind === 'hold' ? [step] : []));
      expect(holds.length).toBeGreaterThan(2);
      for (const { roles, title, meaning, class: criticalClass } of holds) {
        expect(roles, title).not.toEqual([]);
        expect(roles, title).not.toContain('technician');
        expect(meaning, title).not.toBe('');
        expect(criticalClass, title).toBe('A');
      }
    },
  );

  it('SO-hold-witness [S, construction glossary, underfill.blogspot.com/2009/08/inspection-test-plan.html]: a hold stops work, a witness point invites and lets it go on', async () => {
    const { ann, lead } = bay.shop.people;
    await bay.workTo('strip.look');
    const { state } = bay.tablet.held(bay.job.id);
    expect(nextSteps(state).map(({ kind }) => kind)).toEqual(['witness', 'turn']);
    const turn = nextSteps(state).find((step) => step.kind === 'turn')!;
    const turned = { kind: 'turned', step: turn.id, data: { toAngle: turn.toAngle! } } as const;
    await bay.tablet.record(bay.job.id, turned, { by: ann });
    expect(await bay.last()).toMatchObject({ verdict: 'recorded' });
    expect(await bay.kinds()).not.toContain('witnessed');

    await bay.tablet.perform(bay.job.id, { technician: ann, supervisor: lead }, bay.shop.kit, { step: HOLD });
    setClocks(bay.tablet);
    await bay.tablet.sync();
    expect(await bay.pushed(ragsIn(12), ann)).toMatchObject({ verdict: 'refused', code: 'unsigned' });
  });

  it('SO-signoff [S, GM 145.A.48, scribd.com/document/541807299]: the sign-off of a stage is not the release: each is an entry of its own', async () => {
    const { ann, supervisor } = bay.shop.people;
    await bay.workTo('build.hand-over');
    const before = await bay.stateOnServer();
    expect(before.signatures.map(({ holdPoint }) => holdPoint)).toEqual([
      'caps-marked',
      'clear-to-close',
      'clear-to-start',
    ]);
    expect(before.phase).toBe('running');
    expect(await bay.pushed(handOver, ann)).toMatchObject({ verdict: 'refused', code: 'role' });
    expect(await bay.pushed(handOver, supervisor)).toMatchObject({ verdict: 'recorded' });
    const after = await bay.stateOnServer();
    expect(after.phase).toBe('handed over');
    expect(after.signatures).toHaveLength(3);
    const made = await bay.kinds();
    expect(made.filter((kind) => kind === 'signed')).toHaveLength(3);
    expect(made.filter((kind) => kind === 'handed-over')).toHaveLength(1);
  });
});
