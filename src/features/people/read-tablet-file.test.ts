import { describe, expect, it } from 'vitest';
import { countForFile, makeTabletFile } from '@/offline/tablet-file';
import { smallPlan } from '../../../tests/support/small-documents';
import { OfflineServer } from '../../../tests/support/offline-server';
import {
  firstWork,
  openTablet,
  picture,
  recordAll,
  recordRemarks,
} from '../../../tests/support/offline-tablet';
import { bytesOf, partsOf, readTabletFile } from './read-tablet-file';

async function tabletWithWork() {
  const server = new OfflineServer();
  const job = server.addJob(smallPlan());
  const opened = await openTablet(server, { people: ['tech', 'sup'], job });
  return { server, job, ...opened };
}

async function saved(at: Awaited<ReturnType<typeof tabletWithWork>>) {
  const made = await makeTabletFile(at.offline);
  const read = readTabletFile(await made.file.text());
  if (!read.ok) throw new Error(read.why);
  return { made, file: read.file };
}

describe('the file of a tablet', () => {
  it('holds every record as it would be sent, and the bytes of photographs', async () => {
    const at = await tabletWithWork();
    at.server.isAway = true;
    const work = firstWork(4);
    const entries = await recordAll(at, at.job, work);
    const { made, file } = await saved(at);
    const rows = await at.offline.db.outbox.orderBy(':id').toArray();
    expect(made).toMatchObject({ records: entries.length });
    expect(file.entries).toEqual(rows.map(({ entry, signature, key }) => ({ entry, signature, key })));
    const photographed = entries.filter(({ kind }) => kind === 'photographed');
    expect(photographed.length).toBeGreaterThan(0);
    expect(file.photographs.map(({ hash }) => hash).sort()).toEqual(
      photographed.map(({ step }) => picture(step ?? '').hash).sort(),
    );
    for (const photo of file.photographs) {
      const kept = await at.offline.db.photoBytes.get(photo.hash);
      expect(new Uint8Array(bytesOf(photo)!)).toEqual(new Uint8Array(kept!.bytes));
    }
    expect(made.name).toMatch(/^witnessmark-tablet-tablet-\d+-\d{4}-\d\d-\d\d-\d\d-\d\d\.json$/);
  });

  it('takes nothing off the tablet, and holds nothing that the server has', async () => {
    const at = await tabletWithWork();
    await recordRemarks(at, at.job, { count: 2 });
    await at.offline.sync.now();
    expect(await countForFile(at.offline)).toEqual({ records: 0, photographs: 0 });
    at.server.isAway = true;
    await recordRemarks(at, at.job, { from: 3, count: 1 });
    const { file } = await saved(at);
    expect(file.entries).toMatchObject([{ entry: { data: { words: 'no. 3' } } }]);
    expect(await at.offline.db.outbox.count()).toBe(1);
  });

  it('is sent in parts no larger than a push', async () => {
    const at = await tabletWithWork();
    at.server.isAway = true;
    await recordRemarks(at, at.job, { count: 205 });
    const { file } = await saved(at);
    const parts = partsOf(file);
    expect(parts.map(({ entries }) => entries.length)).toEqual([200, 5]);
    expect(parts.flatMap(({ entries }) => entries)).toEqual(file.entries);
    for (const part of parts) expect(JSON.stringify(part).length).toBeLessThan(512 * 1024);
  });
});

describe('reading a tablet’s file', () => {
  it.each([
    ['no JSON', '{"format":"witnessmark-tab', 'cut short'],
    ['another file', '{"entries":[]}', '“format” does not say so'],
    ['a newer file', '{"format":"witnessmark-tablet","v":2}', 'newer program: “v” is not 1'],
    [
      'a file without records',
      '{"format":"witnessmark-tablet","v":1,"tablet":"t","savedAt":"s","clockOffsetMs":0,"photographs":[]}',
      '“entries” is not what it has to be',
    ],
    [
      'a damaged photograph',
      '{"format":"witnessmark-tablet","v":1,"tablet":"t","savedAt":"s","clockOffsetMs":0,"entries":[],"photographs":[{"hash":"x","type":"image/jpeg","bytes":""}]}',
      '“photographs.0.hash” is not',
    ],
  ])('says what is wrong with %s, and where', (_what, text, words) => {
    const read = readTabletFile(text);
    expect(read.ok ? '' : read.why).toContain(words);
  });
});
