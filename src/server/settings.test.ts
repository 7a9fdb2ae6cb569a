import { describe, expect, it } from 'vitest';
import { readSettings, SettingsError } from './settings';

const read = (env: Record<string, string>) => readSettings(env, '/srv/witnessmark');

describe('readSettings', () => {
  it('serves the demo on this machine alone when nothing is set', () => {
    expect(read({})).toMatchObject({
      port: 4321,
      host: '127.0.0.1',
      publicUrl: 'http://localhost:4321',
      dataDir: '/srv/witnessmark/data',
      demo: true,
    });
  });

  it('lets the public address follow the port when only the port is set', () => {
    expect(read({ PORT: '8080' }).publicUrl).toBe('http://localhost:8080');
  });

  it('treats an empty setting as one left out', () => {
    expect(read({ PORT: '', PUBLIC_URL: ' ', DATA_DIR: '', DEMO: '', TRUST_PROXY: '' })).toMatchObject({
      port: 4321,
      demo: true,
    });
  });

  it('keeps the demo away from a public address unless it is asked for by name', () => {
    expect(read({ PUBLIC_URL: 'https://workshop.example' }).demo).toBe(false);
    expect(read({ PUBLIC_URL: 'https://workshop.example', DEMO: 'on' }).demo).toBe(true);
    expect(read({ DEMO: 'off' }).demo).toBe(false);
  });

  it.each([
    [{ PORT: 'abc' }, /PORT is "abc"\. Set it to a whole number/],
    [{ PORT: '0' }, /from 1 to 65535/],
    [{ PORT: '70000' }, /from 1 to 65535/],
    [{ PUBLIC_URL: 'workshop' }, /no address/],
    [{ PUBLIC_URL: 'ftp://workshop.example' }, /no web address/],
    [{ PUBLIC_URL: 'https://workshop.example/app' }, /nothing after the host/],
    [{ PUBLIC_URL: 'http://workshop.example' }, /set it to an https:\/\/ address/],
    [{ DEMO: 'yes' }, /Set it to "on" or "off"/],
    [{ TRUST_PROXY: 'yes' }, /TRUST_PROXY is "yes"/],
    [{ TRUST_PROXY: '10.0.0.0/33' }, /TRUST_PROXY/],
  ])('refuses %j and says what to set', (env, sentence) => {
    expect(() => read(env)).toThrow(SettingsError);
    expect(() => read(env)).toThrow(sentence);
  });

  it('trusts exactly the proxies that are named', () => {
    const { trustedProxies } = read({ TRUST_PROXY: 'loopback, 10.1.0.0/16, 2001:db8::7' });
    expect(trustedProxies.check('127.0.0.1')).toBe(true);
    expect(trustedProxies.check('10.1.2.3')).toBe(true);
    expect(trustedProxies.check('2001:db8::7', 'ipv6')).toBe(true);
    expect(trustedProxies.check('10.2.0.1')).toBe(false);
    expect(read({}).trustedProxies.check('127.0.0.1')).toBe(false);
  });

  it.each([
    [{ MAIL_FROM: 'Workshop <a@b.example>' }, /MAIL_API_KEY/],
    [{ MAIL_API_KEY: 'k', MAIL_FROM: 'nobody' }, /MAIL_FROM is "nobody"/],
    [{ MAIL_API_KEY: 'k', MAIL_FROM: 'a@b.example', MAIL_BASE_URL: 'there' }, /MAIL_BASE_URL/],
    [{ S3_BUCKET: 'photos', S3_REGION: 'eu' }, /S3_ACCESS_KEY_ID is not set/],
    [
      { S3_BUCKET: 'p', S3_REGION: 'e', S3_ACCESS_KEY_ID: 'k', S3_SECRET_ACCESS_KEY: 's', S3_ENDPOINT: 'x' },
      /S3_ENDPOINT/,
    ],
  ])('says what to set for services that are set by half: %o', (env, words) => {
    expect(() => readSettings(env, '/srv')).toThrow(words);
  });

  it('reads the mail service and the bucket', () => {
    expect(readSettings({ MAIL_API_KEY: 'k', MAIL_FROM: 'Workshop <a@b.example>' }, '/srv').mail).toEqual({
      apiKey: 'k',
      from: 'Workshop <a@b.example>',
      baseUrl: undefined,
    });
    const bucket = { S3_BUCKET: 'p', S3_REGION: 'e', S3_ACCESS_KEY_ID: 'k', S3_SECRET_ACCESS_KEY: 's' };
    expect(readSettings(bucket, '/srv').bucket).toMatchObject({
      bucket: 'p',
      region: 'e',
      endpoint: undefined,
    });
  });
});
