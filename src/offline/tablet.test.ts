import { beforeEach, describe, expect, it } from 'vitest';
import { OfflineServer } from '../../tests/support/offline-server';
import { killAndReopen, must, openTablet, TestTablet } from '../../tests/support/offline-tablet';
import {
  canMakeEntries,
  enrolAuthorKey,
  enrolTablet,
  forgetSignIn,
  listSignedIn,
  readTablet,
  refreshSignedIn,
  rememberSignIn,
  setWorking,
  whoIsWorking,
} from './tablet';

let server: OfflineServer;
beforeEach(() => {
  server = new OfflineServer();
});

describe('enrolling', () => {
  it('keeps one id from the first look on', async () => {
    const tablet = new TestTablet(server);
    const offline = tablet.open();
    const [first, second] = await Promise.all([readTablet(offline), readTablet(offline)]);
    expect(first).toEqual({ id: second.id, name: undefined, enrolled: false });
    const after = killAndReopen(tablet, offline);
    expect((await readTablet(after)).id).toBe(first.id);
  });

  it('says what the server says when nobody is signed in', async () => {
    const offline = new TestTablet(server).open();
    expect(await enrolTablet(offline, 'Bay 2')).toMatchObject({ ok: false, code: 'not-signed-in' });
    expect(await readTablet(offline)).toMatchObject({ enrolled: false });
  });

  it('takes another id if the reply that gave the first one out was lost', async () => {
    const offline = new TestTablet(server).open();
    server.session = 'tech';
    server.lostReplies = 1;
    expect(await enrolTablet(offline, 'Bay 2')).toMatchObject({ ok: false, offline: true });
    must(await enrolTablet(offline, 'Bay 2'));
    must(await enrolAuthorKey(offline, 'tech'));
    expect(await readTablet(offline)).toMatchObject({ name: 'Bay 2', enrolled: true });
  });

  it('takes no key for somebody whose session is not the active one', async () => {
    const offline = new TestTablet(server).open();
    server.session = 'tech';
    must(await enrolTablet(offline, 'Bay 2'));
    expect(await enrolAuthorKey(offline, 'mate')).toMatchObject({ ok: false, code: 'other-session' });
    expect(await offline.db.authorKeys.get('mate')).not.toHaveProperty('enrolled');
  });

  it('sends the same key again if the reply was lost', async () => {
    const offline = new TestTablet(server).open();
    server.session = 'tech';
    must(await enrolTablet(offline, 'Bay 2'));
    const answered = server.onAnswer;
    server.onAnswer = (path, answer) => {
      if (path === '/api/keys') throw new TypeError('network error');
      return answer;
    };
    expect(await enrolAuthorKey(offline, 'tech')).toMatchObject({ ok: false });
    server.onAnswer = answered;
    must(await enrolAuthorKey(offline, 'tech'));
    const sent = server.requests.filter(({ path }) => path === '/api/keys').map(({ body }) => body);
    expect(sent[0]).toEqual(sent[1]);
  });
});

describe('people side by side', () => {
  it('are known with and without a key', async () => {
    const { offline } = await openTablet(server, { people: ['tech', 'mate'] });
    await rememberSignIn(offline, {
      person: 'sup',
      name: 'S. Visor',
      roles: ['supervisor'],
      sessionUntil: '2027-01-01T00:00:00.000Z',
    });
    const listed = await listSignedIn(offline);
    expect(listed.map(({ person, hasKey }) => [person, hasKey])).toEqual([
      ['mate', true],
      ['sup', false],
      ['tech', true],
    ]);
  });

  it('stay signed in through trouble of every kind, a 401 included', async () => {
    const { offline } = await openTablet(server);
    server.isAway = true;
    expect(await refreshSignedIn(offline)).toMatchObject({ ok: false, offline: true });
    server.isAway = false;
    server.session = undefined;
    expect(await refreshSignedIn(offline)).toMatchObject({ ok: false, code: 'not-signed-in' });
    expect(await canMakeEntries(offline, 'tech')).toEqual({ ok: true });
  });

  it('are signed out by the server’s own list', async () => {
    const { offline } = await openTablet(server);
    server.session = 'mate';
    must(await refreshSignedIn(offline));
    expect(await canMakeEntries(offline, 'tech')).toMatchObject({ code: 'not-signed-in' });
  });

  it('have their sessions lengthened by a sync now and then, and never ended', async () => {
    const { tablet, offline } = await openTablet(server, { people: ['tech', 'mate'] });
    const until = '2026-08-01T00:00:00.000Z';
    server.sideBySide = [{ personId: 'tech', name: 'T. Nician', roles: ['technician'], sessionUntil: until }];
    must(await offline.sync.now());
    expect((await listSignedIn(offline)).map(({ person, sessionUntil }) => [person, sessionUntil])).toEqual([
      ['mate', expect.stringContaining('2026-06-02')],
      ['tech', until],
    ]);
    const asked = () => server.requests.filter(({ path }) => path === '/api/me').length;
    const before = asked();
    must(await offline.sync.now());
    expect(asked()).toBe(before);
    tablet.now += 3_600_000;
    must(await offline.sync.now());
    expect(asked()).toBe(before + 1);
  });

  it('keep a sign-in that was made while the server’s list was on its way', async () => {
    const { offline } = await openTablet(server);
    server.session = 'tech';
    const { fetch } = offline;
    offline.fetch = async (path, init) => {
      const answer = await fetch(path, init);
      const sessionUntil = '2026-08-01T00:00:00.000Z';
      await rememberSignIn(offline, { person: 'mate', name: 'M. Ate', roles: ['technician'], sessionUntil });
      return answer;
    };
    must(await refreshSignedIn(offline));
    expect((await listSignedIn(offline)).map(({ person }) => person)).toEqual(['mate', 'tech']);
  });

  it('are not working here any more once they signed out', async () => {
    const { tablet, offline } = await openTablet(server);
    await setWorking(offline, 'tech');
    const after = killAndReopen(tablet, offline);
    expect(await whoIsWorking(after)).toBe('tech');
    await forgetSignIn(after, 'tech');
    expect(await whoIsWorking(after)).toBeNull();
    expect(await after.db.authorKeys.get('tech')).toBeDefined();
  });

  it('can make entries until the very end of their session', async () => {
    const { offline } = await openTablet(server);
    const until = offline.now() + 12 * 3_600_000;
    expect(await canMakeEntries(offline, 'tech', until - 1)).toEqual({ ok: true });
    expect(await canMakeEntries(offline, 'tech', until)).toMatchObject({
      ok: false,
      code: 'not-signed-in',
      why: expect.stringContaining('T. Nician'),
    });
  });
});
