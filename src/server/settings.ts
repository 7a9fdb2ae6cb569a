import { BlockList, isIP } from 'node:net';
import path from 'node:path';

/** What an installation is told from outside, checked and ready for use. */
export interface Settings {
  /** The port that the server listens on. */
  port: number;
  /** The address that the server listens on; only this machine unless set. */
  host: string;
  /** The address that people type, without a slash at its end. */
  publicUrl: string;
  /** The folder that holds the database, the photographs and the keys. */
  dataDir: string;
  /** Whether an empty data folder is filled with the demo workshop. */
  demo: boolean;
  /** The reverse proxies whose word about the client's address is taken. */
  trustedProxies: BlockList;
  /** The mail service; without one mail stays on this machine. */
  mail: MailSettings | undefined;
  /** The bucket that photographs lie in; without one they lie in the data folder. */
  bucket: BucketSettings | undefined;
}

/** An object store that speaks S3, and who asks it. */
export interface BucketSettings {
  bucket: string;
  region: string;
  /** Another store than that of the region. */
  endpoint: string | undefined;
  keyId: string;
  secret: string;
}

/** How the mail service is reached. */
export interface MailSettings {
  apiKey: string;
  /** The sender, as `Workshop <record@workshop.example>`. */
  from: string;
  /** Another address of the service than its usual one. */
  baseUrl: string | undefined;
}

/** A setting that cannot be used; its message says what to set. */
export class SettingsError extends Error {
  readonly code = 'wrong-setting';
}

const LOOPBACK_NAMES = new Set(['localhost', '127.0.0.1', '[::1]']);

/** Whether a host name, as a URL spells it, is this machine. */
export function isLoopback(hostname: string): boolean {
  return LOOPBACK_NAMES.has(hostname) || hostname.endsWith('.localhost');
}

/** Reads and checks the settings; throws a SettingsError with a sentence for the person who set them. */
export function readSettings(env: Readonly<Record<string, string | undefined>>, root: string): Settings {
  const port = readPort(env.PORT);
  const publicUrl = readPublicUrl(env.PUBLIC_URL, port);
  return {
    port,
    host: env.HOST?.trim() || '127.0.0.1',
    publicUrl: publicUrl.origin,
    dataDir: path.resolve(root, env.DATA_DIR?.trim() || 'data'),
    demo: readDemo(env.DEMO, publicUrl),
    trustedProxies: readTrustedProxies(env.TRUST_PROXY),
    mail: readMail(env),
    bucket: readBucket(env),
  };
}

function readPort(text: string | undefined): number {
  if (text === undefined || text.trim() === '') return 4321;
  const port = Number(text);
  if (!/^\d+$/.test(text.trim()) || port < 1 || port > 65_535) {
    throw new SettingsError(
      `PORT is "${text}". Set it to a whole number from 1 to 65535, or leave it out for 4321.`,
    );
  }
  return port;
}

function readPublicUrl(text: string | undefined, port: number): URL {
  if (text === undefined || text.trim() === '') return new URL(`http://localhost:${port}`);
  const wanted = 'Set it to the address that people type, for example https://workshop.example.';
  if (!URL.canParse(text.trim()))
    throw new SettingsError(`PUBLIC_URL is "${text}", which is no address. ${wanted}`);
  const url = new URL(text.trim());
  if (url.protocol !== 'https:' && url.protocol !== 'http:') {
    throw new SettingsError(`PUBLIC_URL is "${text}", which is no web address. ${wanted}`);
  }
  if (
    url.pathname !== '/' ||
    url.search !== '' ||
    url.hash !== '' ||
    url.username !== '' ||
    url.password !== ''
  ) {
    throw new SettingsError(
      `PUBLIC_URL is "${text}". Set it to the address alone, with nothing after the host.`,
    );
  }
  if (url.protocol === 'http:' && !isLoopback(url.hostname)) {
    throw new SettingsError(
      `PUBLIC_URL is "${text}". Tablets can only work without a network over HTTPS: set it to an https:// address.`,
    );
  }
  return url;
}

/** The demo has known passwords, so it loads by itself only where nobody else can reach it. */
function readDemo(text: string | undefined, publicUrl: URL): boolean {
  switch (text?.trim().toLowerCase()) {
    case undefined:
    case '':
      return isLoopback(publicUrl.hostname);
    case 'on':
      return true;
    case 'off':
      return false;
    default:
      throw new SettingsError(`DEMO is "${text}". Set it to "on" or "off", or leave it out.`);
  }
}

function readBucket(env: Readonly<Record<string, string | undefined>>): BucketSettings | undefined {
  const given = (name: string) => env[name]?.trim() || undefined;
  const bucket = given('S3_BUCKET');
  if (bucket === undefined) return undefined;
  const [region, keyId, secret] = ['S3_REGION', 'S3_ACCESS_KEY_ID', 'S3_SECRET_ACCESS_KEY'].map((name) => {
    const value = given(name);
    if (value !== undefined) return value;
    throw new SettingsError(
      `S3_BUCKET is "${bucket}", and ${name} is not set. Set it, or leave S3_BUCKET out to keep photographs in the data folder.`,
    );
  }) as [string, string, string];
  const endpoint = given('S3_ENDPOINT');
  if (endpoint !== undefined && !URL.canParse(endpoint)) {
    throw new SettingsError(
      `S3_ENDPOINT is "${endpoint}", which is no address. Set it to that of the store, for example https://objects.example.`,
    );
  }
  return { bucket, region, endpoint, keyId, secret };
}

function readMail(env: Readonly<Record<string, string | undefined>>): MailSettings | undefined {
  const [apiKey, from, baseUrl] = [env.MAIL_API_KEY, env.MAIL_FROM, env.MAIL_BASE_URL].map((text) =>
    text?.trim(),
  );
  if (!apiKey && !from) return undefined;
  if (!apiKey) {
    throw new SettingsError('MAIL_FROM is set without MAIL_API_KEY. Set both, or neither to send no mail.');
  }
  if (!from || !/^[^<>@\s]+@[^<>@\s]+$|^[^<>]+<[^<>@\s]+@[^<>@\s]+>$/.test(from)) {
    throw new SettingsError(
      `MAIL_FROM is "${from ?? ''}". Set it to the sender, for example Workshop <record@workshop.example>.`,
    );
  }
  if (baseUrl && !URL.canParse(baseUrl)) {
    throw new SettingsError(`MAIL_BASE_URL is "${baseUrl}", which is no address. Leave it out if in doubt.`);
  }
  return { apiKey, from, baseUrl: baseUrl || undefined };
}

function readTrustedProxies(text: string | undefined): BlockList {
  const proxies = new BlockList();
  for (const item of (text ?? '').split(',').map((part) => part.trim())) {
    if (item === '' || item === 'off') continue;
    if (item === 'loopback') {
      proxies.addSubnet('127.0.0.0', 8, 'ipv4');
      proxies.addAddress('::1', 'ipv6');
    } else {
      addProxy(proxies, item, text ?? '');
    }
  }
  return proxies;
}

function addProxy(proxies: BlockList, item: string, text: string): void {
  const [address = '', prefix, ...rest] = item.split('/');
  const version = isIP(address);
  const bits = prefix === undefined ? undefined : Number(prefix);
  const isPrefixRight =
    prefix === undefined || (/^\d{1,3}$/.test(prefix) && Number(prefix) <= (version === 4 ? 32 : 128));
  if (version === 0 || rest.length > 0 || !isPrefixRight) {
    throw new SettingsError(
      `TRUST_PROXY is "${text}". Set it to "loopback", or to the addresses of your reverse proxies, ` +
        'for example 10.0.0.2 or 10.0.0.0/24, with commas between them.',
    );
  }
  const family = version === 4 ? 'ipv4' : 'ipv6';
  if (bits === undefined) proxies.addAddress(address, family);
  else proxies.addSubnet(address, bits, family);
}
