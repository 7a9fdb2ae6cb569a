import type { Certificate } from '@/domain/certificate';
import type { Role } from '@/domain/role';
import type { Actor } from '@/server/actor';
import { DAY } from '@/server/clock';
import type { App } from '@/server/compose';
import type { Trx } from '@/server/database';
import { hashNewPassword, storePassword } from '@/server/passwords';
import { addFirstOwner, addPerson, hasPeople } from '@/server/people';
import { hashNewPin, storePin } from '@/server/pins';
import { setAuthorisation } from '@/server/authorisations';
import { recordCalibration } from '@/server/calibrations';
import { addTool, type NewTool } from '@/server/tools';
import { releaseShippedIfNone } from '@/server/released-documents';
import { setWitnessAddress } from '@/server/head-mail';
import { setWorkshop } from '@/server/workshop';
import { DEMO_DAYS, seedClock, seedDemoJobs } from './seed-jobs';

/*
 * The demo workshop. Every name, address and serial number in it is invented. Its passwords are known to
 * everybody, so `readSettings` lets it load only on this machine, or where DEMO=on asks for it.
 */

/** A person of the demo, with what they sign in and sign with. */
export interface DemoSignIn {
  name: string;
  email: string;
  password: string;
  pin: string;
  roles: readonly Role[];
  /** By what they sign hold points. */
  certificate?: Certificate | undefined;
}

const PASSWORD = 'bearing-day-demo';

export const demoSignIns: readonly [DemoSignIn, ...DemoSignIn[]] = [
  demoPerson('Ottilie Marchbank', 'owner', '352806', ['owner']),
  demoPerson('Ines Varga', 'ines', '418306', ['technician']),
  demoPerson('T. Halloran', 'halloran', '590271', ['technician']),
  demoPerson('Bram Ostrova', 'bram', '736914', ['technician']),
  demoPerson('M. Okafor-Lindh', 'supervisor', '285017', ['supervisor'], {
    number: 'LY-MT-014',
    kind: 'master technician',
  }),
  demoPerson('Rowan Achterberg', 'quality', '604392', ['quality lead'], {
    number: 'LY-QI-006',
    kind: 'quality inspector',
  }),
  demoPerson('Selma Quist', 'auditor', '917350', ['auditor']),
];

/** Signed heads of the demo are mailed here; without a mail service the letters stay on this machine. */
const WITNESS_ADDRESS = 'heads@notary.example';
/** For how long from today those of the demo who have a certificate may sign by it. */
const AUTHORISED_DAYS = 300;
const WORKSHOP = { name: 'Lantern Yard Engines', zone: 'Europe/London' };

interface DemoTool {
  tool: Omit<NewTool, 'dueOn' | 'cycleLimit'> & { cycleLimit?: number };
  /** Days from today to the day until which its calibration counts; one is past it, and one near it. */
  dueInDays: number;
  /** At each point what stood at the reference, as often as it was read. */
  readings: readonly (readonly [set: string, references: string])[];
}

const TOOLS: readonly DemoTool[] = [
  torqueWrench('4', '25', 'TW25-0417', 96, [
    ['4.0', '4.02 4.05 3.97 4.04 4.06'],
    ['15.0', '15.1 15.2 15.1 14.9 15.1'],
    ['25.0', '24.8 24.7 24.9 24.8 24.8'],
  ]),
  torqueWrench('20', '100', 'TW100-0233', 41, [
    ['20.0', '20.3 20.4 20.2 20.3 20.5'],
    ['60.0', '60.4 60.1 60.6 60.4 60.3'],
    ['100.0', '99.1 98.8 99.2 99.0 99.3'],
  ]),
  torqueWrench('40', '210', 'TW210-0187', 158, [
    ['40.0', '40.5 40.9 40.6 40.2 40.7'],
    ['120.0', '121.0 121.6 120.8 121.2 121.1'],
    ['210.0', '208.6 207.9 208.8 208.2 209.0'],
  ]),
  torqueWrench('60', '330', 'TW330-0108', -12, [
    ['60.0', '61.1 61.6 60.9 61.9 61.3'],
    ['200.0', '203.0 204.2 202.7 203.6 203.1'],
    ['330.0', '326.2 325.0 327.1 326.4 325.8'],
  ]),
  measuringTool('Angle gauge', 'angle gauge', ['0', '360'], 'deg', 'AG-0061', 203, [
    ['90', '90'],
    ['180', '181'],
  ]),
  measuringTool('Micrometer', 'micrometer', ['25', '50'], 'mm', 'MC50-0912', 77, [
    ['25.000', '25.000'],
    ['50.000', '50.001'],
  ]),
  measuringTool('Micrometer', 'micrometer', ['50', '75'], 'mm', 'MC75-0913', 77, [
    ['50.000', '50.001'],
    ['75.000', '75.001'],
  ]),
  measuringTool('Bore gauge', 'bore gauge', ['35', '60'], 'mm', 'BG60-0044', 120, [
    ['45.000', '45.001'],
    ['60.000', '59.999'],
  ]),
  measuringTool('Oil pressure gauge', 'pressure gauge', ['0', '10'], 'bar', 'PG10-0350', 18, [
    ['2.0', '2.0'],
    ['8.0', '7.9'],
  ]),
];

/** Fills an empty data folder with the demo: its people, tools and documents, and then its jobs; says whether it did. */
export async function seedDemo(app: App): Promise<boolean> {
  if (await hasPeople(app.db)) return false;
  const nowMs = app.clock.now().getTime();
  const clock = seedClock(nowMs - DEMO_DAYS * DAY);
  if (!(await seedWorkshop(app, { ...app, clock }))) return false;
  await seedDemoJobs(app, clock, nowMs, demoSignIns);
  return true;
}

/** People, tools and documents, whole or not at all; made in the `past`, because the demo's jobs were too. */
async function seedWorkshop(app: App, past: App): Promise<boolean> {
  const people = await Promise.all(
    demoSignIns.map(async (person) => ({
      ...person,
      passwordHash: await hashNewPassword(person.password),
      pinHash: await hashNewPin(person.pin),
    })),
  );
  return app.db.transaction().execute(async (trx) => {
    const [first, ...others] = people;
    if (first === undefined || (await hasPeople(trx))) return false;
    const owner = await addFirstOwner(trx, first, past);
    await setWorkshop(trx, owner, WORKSHOP, past);
    await setWitnessAddress(trx, owner, WITNESS_ADDRESS, past);
    for (const person of others) {
      const id = await addPerson(trx, owner, person, past);
      const actor: Actor = { personId: id, name: person.name, roles: person.roles, sessionId: undefined };
      await storePassword(trx, id, person.passwordHash, past);
      await storePin(trx, actor, person.pinHash, past);
      if (person.certificate) {
        const authorisation = {
          certificate: person.certificate,
          authorisedUntil: dayFrom(app, AUTHORISED_DAYS),
        };
        await setAuthorisation(trx, owner, id, authorisation, past);
      }
    }
    await storePassword(trx, owner.personId, first.passwordHash, past);
    await storePin(trx, owner, first.pinHash, past);
    for (const demoTool of TOOLS) await addDemoTool(trx, owner, demoTool, { app, past });
    await releaseShippedIfNone(trx, owner, past);
    return true;
  });
}

async function addDemoTool(
  trx: Trx,
  owner: Actor,
  { tool, dueInDays, readings }: DemoTool,
  { app, past }: { app: App; past: App },
): Promise<void> {
  const added = await addTool(trx, owner, { cycleLimit: null, ...tool, dueOn: null }, past);
  const unit = tool.unit ?? '';
  await recordCalibration(
    trx,
    owner,
    added.id,
    {
      on: dayFrom(app, dueInDays - 365),
      dueOn: dayFrom(app, dueInDays),
      certificate: `LY-${tool.serial}`,
      readings: readings.flatMap(([set, references]) =>
        references.split(' ').map((reference) => ({ set, reference, unit })),
      ),
    },
    past,
  );
}

/** Counted from today, so that the demo's one tool past its date is past it whenever it is loaded. */
function dayFrom({ clock }: App, days: number): string {
  return new Date(clock.now().getTime() + days * DAY).toISOString().slice(0, 10);
}

function demoPerson(
  name: string,
  mailbox: string,
  pin: string,
  roles: readonly Role[],
  certificate?: Certificate,
): DemoSignIn {
  return { name, email: `${mailbox}@witnessmark.example`, password: PASSWORD, pin, roles, certificate };
}

function torqueWrench(
  low: string,
  high: string,
  serial: string,
  dueInDays: number,
  readings: DemoTool['readings'],
): DemoTool {
  const name = `Torque wrench ${low} to ${high} N·m`;
  return {
    tool: {
      name,
      kind: 'torque wrench',
      serial,
      rangeLow: low,
      rangeHigh: high,
      unit: 'N·m',
      torqueType: 'II',
      torqueClass: 'A',
      cycleLimit: 5000,
    },
    dueInDays,
    readings,
  };
}

function measuringTool(
  name: string,
  kind: string,
  [low, high]: readonly [string, string],
  unit: string,
  serial: string,
  dueInDays: number,
  readings: DemoTool['readings'],
): DemoTool {
  return {
    tool: { name: `${name} ${low} to ${high} ${unit}`, kind, serial, rangeLow: low, rangeHigh: high, unit },
    dueInDays,
    readings,
  };
}
