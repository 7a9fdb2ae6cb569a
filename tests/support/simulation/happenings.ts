/* What happens to the tablets, the network, the server and the people, one thing at a time. */
import { enrolAuthorKey, rememberSignIn } from '@/offline/tablet';
import { makeTabletFile } from '@/offline/tablet-file';
import { readRows } from './disk';
import { checkDisk } from './invariants';
import type { Run } from './run';
import type { SimTablet, Tab } from './tablet';

const SECOND = 1000;
const MINUTE = 60 * SECOND;
const HOUR = 60 * MINUTE;

type Happening = (run: Run) => Promise<void> | void;

/** What every run has. */
const ORDINARY: readonly (readonly [weight: number, happening: Happening])[] = [
  [34, act],
  [40, moveNetwork],
  [10, passTime],
  [4, openOrSync],
];

/** What a run may have besides; each has some of them. */
const FAULTS: readonly (readonly [weight: number, happening: Happening])[] = [
  [6, disturbNetwork],
  [10, disturbNetwork],
  [20, disturbNetwork],
  [2, jumpClock],
  [4, changeReach],
  [4, killTab],
  [3, openSecondTab],
  [2, changeRoom],
  [1.5, upgrade],
  [1, restart],
  [4, backUpOrRestore],
  [1.5, copyTablet],
  [0.6, loseTablet],
  [3, comeAnew],
  [2, declareLost],
  [2, bringFileIn],
  [2, changePeople],
  [1, letHoursPass],
];

/** Chooses what this run is to suffer; the answer makes the next thing happen. */
export function chooseHappenings({ chance }: Run): Happening {
  const share = chance.pick([0.2, 0.4, 0.7]);
  const chosen = [...ORDINARY, ...FAULTS.filter(() => chance.happens(share))];
  return (run) => run.chance.weigh(chosen)(run);
}

function someTab(run: Run, isFit: (tab: Tab) => boolean = () => true): Tab | undefined {
  const tabs = run.tablets.flatMap((tablet) => tablet.tabs).filter(isFit);
  return tabs.length === 0 ? undefined : run.chance.pick(tabs);
}

function act(run: Run): void {
  const tab = someTab(run, ({ isBusy }) => !isBusy);
  if (tab) run.act(tab);
}

async function moveNetwork({ network, chance }: Run): Promise<void> {
  const { there, back } = network;
  // Not always the oldest: requests overtake each other.
  if (back.length > 0 && (there.length === 0 || chance.happens(0.5))) network.bringBack(chance.pick(back));
  else if (there.length > 0) await network.arrive(chance.pick(there));
}

async function disturbNetwork(run: Run): Promise<void> {
  const { network, chance } = run;
  const { there, back, echoes } = network;
  if (echoes.length > 0 && chance.happens(0.4)) {
    const call = chance.pick(echoes);
    run.note(`request ${call.number} of ${call.from} arrives once more`);
    return network.arriveAgain(call);
  }
  const calls = [...there, ...back];
  if (calls.length === 0) return;
  const call = chance.pick(calls);
  const what = `${call.reply ? 'reply' : 'request'} ${call.number} of ${call.from} (${call.path})`;
  const fate = chance.weigh([
    [5, 'lost'],
    [2, 'half'],
    [1, 'half and whole'],
    [1, 'foreign'],
    [3, 'echo'],
  ] as const);
  run.note(`${what}: ${fate}`);
  switch (fate) {
    case 'lost':
      network.lose(call);
      break;
    case 'half':
    case 'half and whole':
      if (call.reply) network.bringHalf(call, fate === 'half and whole');
      else network.lose(call);
      break;
    case 'foreign':
      network.answerForeign(call, chance.pick([200, 502, 503]));
      break;
    case 'echo':
      network.echoes.push({ ...call });
  }
}

function passTime({ clock, chance, tablets }: Run): void {
  clock.now += chance.between(1, 100) * SECOND;
  for (const { tabs } of tablets) for (const tab of tabs) tab.ring();
}

function letHoursPass(run: Run): void {
  run.clock.now += run.chance.between(1, 30) * HOUR;
  run.note('hours pass');
  for (const { tabs } of run.tablets) for (const tab of tabs) tab.ring();
}

/** A page is opened where there is none; elsewhere somebody pulls, or the browser tells of the network. */
function openOrSync(run: Run): void {
  const tablet = run.chance.pick(run.tablets);
  const [tab] = tablet.tabs;
  if (!tab) {
    run.note(`${tablet.name}: the page is opened`);
    tablet.openTab();
  } else if (run.chance.happens(0.5)) {
    tab.tellOnline();
  } else {
    // What comes of it is in the tablet's own records.
    tab.offline.sync.now().catch((error: unknown) => run.note(`${tablet.name}: ${String(error)}`));
  }
}

function jumpClock(run: Run): void {
  const tablet = run.chance.pick(run.tablets);
  tablet.offsetMs = run.chance.between(-90, 90) * run.chance.pick([SECOND, MINUTE, HOUR]);
  run.note(`${tablet.name}: the clock is off by ${tablet.offsetMs / SECOND} s`);
}

function changeReach(run: Run): void {
  const tablet = run.chance.pick(run.tablets);
  tablet.isAway = !tablet.isAway;
  run.note(`${tablet.name}: ${tablet.isAway ? 'no network' : 'network'}`);
  if (!tablet.isAway) for (const tab of tablet.tabs) tab.tellOnline();
}

async function killTab(run: Run): Promise<void> {
  const tab = someTab(run);
  if (!tab) return;
  const isTakenBack = run.chance.happens(0.6);
  run.note(`${tab.tablet.name}: a page is killed${tab.isBusy ? ' in the middle of a record' : ''}`);
  tab.kill(isTakenBack);
  if (run.chance.happens(0.4)) await checkDisk(run, tab.tablet);
}

function openSecondTab(run: Run): void {
  const tablet = run.chance.pick(run.tablets);
  if (tablet.tabs.length >= 2) return;
  run.note(`${tablet.name}: one more page is opened`);
  tablet.openTab();
}

function changeRoom(run: Run): void {
  const tablet = run.chance.pick(run.tablets);
  tablet.fill(!tablet.isFull);
  run.note(`${tablet.name}: the disk ${tablet.isFull ? 'is full' : 'has room again'}`);
}

/** A new version opens the records; a page of the old one may still be open, and is closed out of them. */
function upgrade(run: Run): void {
  const tablet = run.chance.pick(run.tablets);
  if (tablet.schema === 'next') return;
  tablet.schema = 'next';
  run.note(`${tablet.name}: the next version of the program`);
  const stays = run.chance.happens(0.3) ? tablet.tabs.at(-1) : undefined;
  for (const tab of [...tablet.tabs]) if (tab !== stays) tab.kill(run.chance.happens(0.5));
  tablet.openTab();
}

async function restart(run: Run): Promise<void> {
  await run.turns.outside(() => run.server.restart());
  run.note('the server is started anew');
}

async function backUpOrRestore(run: Run): Promise<void> {
  const { server, turns, chance } = run;
  if (!server.hasBackup() || run.restores >= 2 || chance.happens(0.5)) {
    await turns.outside(() => server.backUp());
    run.note('the server is backed up');
    // Whoever comes now is not in the copy.
    if (chance.happens(0.5)) await comeAnew(run);
    return;
  }
  for (const tablet of run.tablets) {
    const rows = await run.onDisk(tablet, (db) => db.refused.toArray());
    for (const { id } of rows) run.refusedBefore.add(id);
  }
  // No restore is done within the same moment as the one before.
  run.clock.now += MINUTE;
  await turns.outside(() => server.restore());
  run.restores += 1;
  // Whoever signed in since the copy was made has no session any more.
  for (const tablet of run.tablets) tablet.session = undefined;
  // Whoever was let in or out since the copy is as they were.
  run.away = new Set(await turns.outside(() => run.readAway()));
  run.note('the server is restored from the backup');
}

/** The disk of one tablet is copied into another, which goes on as if it were the first. */
async function copyTablet(run: Run): Promise<void> {
  if (run.hasCopy) return;
  run.hasCopy = true;
  const tablet = run.chance.pick(run.tablets);
  const rows = await run.onDisk(tablet, readRows);
  const copy = await run.addTablet(rows, tablet.jobs, run.chance.happens(0.5));
  copy.offsetMs = tablet.offsetMs;
  for (const told of run.told.values()) if (told.tablets.has(tablet)) told.tablets.add(copy);
  run.note(`${copy.name} is a copy of ${tablet.name}`);
}

function loseTablet(run: Run): void {
  if (run.tablets.length < 3) return;
  const tablet: SimTablet = run.chance.pick(run.tablets);
  for (const tab of [...tablet.tabs]) tab.kill(true);
  run.tablets = run.tablets.filter((one) => one !== tablet);
  run.lost.push(tablet);
  run.note(`${tablet.name} is lost`);
}

/** Somebody signs in on a tablet for the first time, while the network is at its best. */
async function comeAnew(run: Run): Promise<void> {
  const tab = someTab(run, ({ isBusy, tablet }) => !isBusy && !tablet.hasNewcomer && !tablet.isAway);
  if (!tab) return;
  const { tablet, offline } = tab;
  const { cy } = run.beginning.people;
  tablet.session = cy;
  const sessionUntil = new Date(tablet.now() + 400 * HOUR).toISOString();
  const signedIn = { person: cy.id, name: cy.name, roles: [...cy.roles], sessionUntil };
  try {
    await run.finish(rememberSignIn(offline, signedIn));
    const outcome = await run.finish(enrolAuthorKey(offline, cy.id), { network: true });
    tablet.hasNewcomer = outcome.ok;
    run.note(
      `${tablet.name}: ${cy.name} signs in for the first time (${outcome.ok ? 'with a key' : outcome.code})`,
    );
  } catch (error) {
    run.hearFailure(tab, error);
  }
}

/** The office declares a tablet lost that is; of a copied one it could not say which. */
async function declareLost(run: Run): Promise<void> {
  const tablet = run.lost.find(({ device }) => !run.isCopied(device));
  if (!tablet) return;
  await run.turns.outside(() => run.server.declareLost(run.beginning.people.owner, tablet.device));
  run.note(`${tablet.name} is declared lost`);
}

/** What lay on a lost tablet comes to the office as a file after all. */
async function bringFileIn(run: Run): Promise<void> {
  if (run.lost.length === 0) return;
  const tablet = run.chance.pick(run.lost);
  const { newId } = tablet.around;
  const { file, records } = await run.onDisk(tablet, (db) =>
    makeTabletFile({ db, newId, now: () => tablet.now() }),
  );
  if (records === 0) return;
  run.note(`the file of ${tablet.name} is brought in`);
  const replies = await run.turns.outside(async () =>
    run.server.bringIn(run.beginning.people.supervisor, await file.text()),
  );
  for (const reply of replies) run.hearFile(`the file of ${tablet.name}`, reply);
}

async function changePeople(run: Run): Promise<void> {
  const name = run.chance.pick(['ann', 'ben', 'second', 'supervisor'] as const);
  const isActive = run.away.has(name);
  const { owner, [name]: person } = run.beginning.people;
  await run.turns.outside(() => run.server.setActive(owner, person.id, isActive));
  if (isActive) run.away.delete(name);
  else run.away.add(name);
  run.note(`${person.name} is ${isActive ? 'active again' : 'deactivated'}`);
}
