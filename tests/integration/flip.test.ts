import { spawn, spawnSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { main as verifyTrailCommand } from '@/commands/verify-trail';
import { verifyTrail } from '@/domain/trail';
import type { TrailBody, TrailExport } from '@/domain/trail-export';
import { GET as getExport } from '@/pages/api/jobs/[id]/export';
import { photoStorage } from '@/server/photos';
import { nodeChecks } from '@/server/trail-checks';
import { ask, enrolTestTablet, openShop, openTestJob, setClocks } from '../support/tablet';
import { fixedChanges, recordChanges } from '../support/forged-records';
import { bitChanges, type Change, hitsMark, seeded, signChanges } from '../support/trail-changes';

/*
 * A whole job's trail, changed in more than a thousand ways. Two verifiers that share no code, ours and the one
 * in Python, have to see each of them, and in the same place.
 */

const ENTRIES = 400;
const hasPython = spawnSync('python3', ['--version']).status === 0;
const folder = mkdtempSync(path.join(tmpdir(), 'witnessmark-flip-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** Outcome, and the place where it is broken. */
type Finding = [outcome: 'whole' | 'broken' | 'not a trail', place: string | null];

let file: Buffer;
let body: TrailBody;

beforeAll(async () => {
  file = Buffer.from(await makeTrail());
  ({ body } = JSON.parse(file.toString()) as TrailExport);
  writeFileSync(path.join(folder, 'trail.json'), file);
}, 60_000);

/** A job from its opening to its handover, with an entry that the server refused and one that it notes for it. */
async function makeTrail(): Promise<string> {
  const shop = await openShop();
  const { supervisor, ann } = shop.people;
  const tablet = await enrolTestTablet(shop, [supervisor, ann]);
  const job = await openTestJob(tablet, supervisor);
  const people = { technician: ann, supervisor };
  const last = job.plan.steps.find(({ kind }) => kind === 'hand-over')!;
  await tablet.perform(job.id, people, shop.kit, { step: last.id });
  const { id, name, serial, dueOn } = shop.kit.workshop.tools[0]!;
  while (tablet.held(job.id).state.count < ENTRIES) {
    const taken = { kind: 'tool-taken', data: { use: 'torque', tool: { id, name, serial, dueOn } } } as const;
    await tablet.record(job.id, taken, { by: tablet.held(job.id).state.count % 3 === 0 ? supervisor : ann });
  }
  const wrong = { kind: 'done', data: {}, step: last.id } as const;
  await tablet.record(job.id, wrong, { by: ann, force: true });
  setClocks(tablet);
  await tablet.sync();
  await tablet.perform(job.id, people, shop.kit);
  setClocks(tablet);
  await tablet.sync();
  const exported = await ask(getExport, { as: supervisor, params: { id: job.id } });
  const { photographs } = (JSON.parse(exported.text) as TrailExport).body;
  for (const { hash } of photographs) {
    const bytes = await photoStorage(shop.app).find(`photos/${hash}`);
    if (bytes !== undefined) kept.set(hash, Buffer.from(bytes));
  }
  return exported.text;
}

const kept = new Map<string, Buffer>();

/** Puts the photographs of the trail into a folder; one of them with a byte changed, if so asked. */
function photographFolder(name: string, changed?: { hash: string; at: number }): string {
  const place = path.join(folder, name);
  mkdirSync(place);
  for (const [hash, bytes] of kept) {
    const copy = Buffer.from(bytes);
    if (hash === changed?.hash) copy[changed.at] = copy[changed.at]! ^ 1;
    writeFileSync(path.join(place, `${hash}.jpg`), copy);
  }
  return place;
}

/** What the verifier in Python finds in each of these. */
async function findInPython(changes: readonly Change[]): Promise<Finding[]> {
  const python = spawn('python3', ['-B', 'tests/support/verify_variants.py'], {
    stdio: ['pipe', 'pipe', 'inherit'],
  });
  const lines = [path.join(folder, 'trail.json'), ...changes.map((change) => JSON.stringify(change))];
  python.stdin.end(lines.join('\n'));
  const printed: Buffer[] = [];
  for await (const piece of python.stdout) printed.push(piece as Buffer);
  return JSON.parse(Buffer.concat(printed).toString()) as Finding[];
}

/** What ours finds: in this process, or by its command where something is compared that is not in the file. */
async function findInOurs(change: Change): Promise<Finding> {
  const bytes = changedFile(change);
  if (change.head !== undefined || change.key !== undefined || change.photographs !== undefined) {
    return findByCommand(bytes, change);
  }
  const verdict = await verifyTrail(bytes, checks);
  if (verdict.ok) return ['whole', null];
  return 'brokenAt' in verdict ? ['broken', verdict.brokenAt] : ['not a trail', null];
}

const checks = nodeChecks();

async function findByCommand(bytes: Buffer, { head, key, photographs }: Change): Promise<Finding> {
  const log = vi.spyOn(console, 'log').mockImplementation(() => undefined);
  const error = vi.mocked(console.error).mockImplementation(() => undefined);
  writeFileSync(path.join(folder, 'changed.json'), bytes);
  const asked = Object.entries({ head, key, photographs }).flatMap(([name, value]) =>
    value === undefined ? [] : [`--${name}`, value],
  );
  const code = await verifyTrailCommand(['changed.json', ...asked], folder);
  if (code === 0) return ['whole', null];
  const said = String(error.mock.lastCall?.[0] ?? log.mock.lastCall?.[0]);
  const broken = /^Broken: changed.json\nAt (identity: [^:]+|[^:]+): /.exec(said);
  return broken ? ['broken', broken[1]!] : ['not a trail', null];
}

function changedFile({ text, edits = [] }: Change): Buffer {
  if (text !== undefined) return Buffer.from(text);
  return edits.reduce(
    (bytes, [at, taken, put]) =>
      Buffer.concat([bytes.subarray(0, at), Buffer.from(put, 'base64'), bytes.subarray(at + taken)]),
    file,
  );
}

/** Has both verifiers look at every change, and compares what they find with each other. */
async function findInBoth(changes: readonly Change[]): Promise<Finding[]> {
  const inPython = hasPython ? findInPython(changes) : undefined;
  const found: Finding[] = [];
  for (const change of changes) found.push(await findInOurs(change));
  if (inPython === undefined) return found;
  const named = (findings: Finding[]) => findings.map((finding, i) => [changes[i]!.name, ...finding]);
  expect(named(await inPython), 'ours and the one in Python differ').toEqual(named(found));
  return found;
}

const seenBy = hasPython
  ? 'seen by both verifiers'
  : 'seen by ours alone: there is no python3 on this machine';

describe(`a trail of a whole job, ${seenBy},`, () => {
  it('is whole before anything is changed, and holds what a change could hit', async () => {
    expect(body.entries.length).toBeGreaterThanOrEqual(ENTRIES);
    expect(body.entries.some(({ recorded }) => recorded.kind === 'refused')).toBe(true);
    expect(body.entries.at(-1)!.recorded.kind).toBe('handed-over');
    expect(body.heads.length).toBeGreaterThan(0);
    expect(kept.size).toBeGreaterThan(0);
    const asked = {
      head: body.entries.at(-1)!.hash,
      key: body.workshopKeys[0]!.key,
      photographs: photographFolder('as they were'),
    };
    const changes = [{ name: 'nothing' }, { name: 'nothing, all compared', ...asked }];
    expect(await findInBoth(changes)).toEqual([
      ['whole', null],
      ['whole', null],
    ]);
  }, 60_000);

  it('is broken by every change of a byte, wherever it is', async () => {
    const next = seeded(20310506);
    const changes = [...bitChanges(file, 38, next), ...signChanges(file, 45, next)];
    expect(changes.length).toBeGreaterThan(1000);
    const found = await findInBoth(changes);
    for (const [i, change] of changes.entries()) {
      const [outcome] = found[i]!;
      if (hitsMark(file, change)) expect(['broken', 'not a trail'], change.name).toContain(outcome);
      else expect(outcome, change.name).toBe('broken');
    }
  }, 120_000);

  it('that somebody put right again and sealed is broken where they had no key', async () => {
    const changes = [...recordChanges(file, seeded(7)), ...fixedChanges(file)];
    const found = await findInBoth(changes);
    expect(found.map(([, place], i) => [changes[i]!.name, place])).toEqual(
      changes.map(({ name, place, isWhole }) => [name, isWhole === true ? null : place]),
    );
  }, 60_000);

  it('does not bear a photograph with another byte', async () => {
    const next = seeded(11);
    const hashes = [...kept.keys()];
    const changes = Array.from({ length: 20 }, (_, i): Change => {
      const hash = hashes[i % hashes.length]!;
      const at = Math.floor(next() * kept.get(hash)!.length);
      const place = `photograph ${hash}`;
      return {
        name: `byte ${at} of ${place}`,
        photographs: photographFolder(`changed ${i}`, { hash, at }),
        place,
      };
    });
    expect(await findInBoth(changes)).toEqual(changes.map(({ place }) => ['broken', place]));
  }, 60_000);
});
