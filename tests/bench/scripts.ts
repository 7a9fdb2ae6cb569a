import { gzipSync } from 'node:zlib';
import type { Page, Response } from '@playwright/test';
import { TOUCHABLE } from './touchable';
import { type Figure, saying } from './report';

const LIMIT_SCRIPTS_KB = 190;
const LIMIT_PRECACHED_KB = 400;
const FONT = /\.woff2?$/;

/** What a browser with an empty cache has to fetch and read before the first action can be recorded. */
export async function measureScripts(page: Page, address: string): Promise<Figure> {
  saying('the JavaScript before the first action');
  const session = await page.context().newCDPSession(page);
  await session.send('Network.enable');
  await session.send('Network.setBypassServiceWorker', { bypass: true });
  await session.send('Network.setCacheDisabled', { cacheDisabled: true });
  const scripts: Response[] = [];
  const note = (response: Response) => {
    if (response.request().resourceType() === 'script') scripts.push(response);
  };
  page.on('response', note);
  await page.goto('about:blank');
  await page.goto(address);
  await page.locator(TOUCHABLE).waitFor();
  page.off('response', note);
  const inline = await page.evaluate(() =>
    [...document.querySelectorAll('script:not([src])')].map(({ textContent }) => textContent).join('\n'),
  );
  await session.detach();
  const sizes = await Promise.all(scripts.map(sizeOf));
  sizes.push({ name: 'in the page itself', bytes: gzipSync(inline).length });
  sizes.sort((a, b) => b.bytes - a.bytes);
  return {
    what: 'JavaScript before the first action can be recorded, gzip',
    value: kilobytes(sizes),
    limit: LIMIT_SCRIPTS_KB,
    unit: 'kB',
    detail: sizes.map(({ name, bytes }) => `${name} ${(bytes / 1000).toFixed(1)}`).join(', '),
  };
}

/** Everything that the service worker keeps for work without a network, as it comes over the line. */
export async function measurePrecached(page: Page, url: string): Promise<Figure> {
  const addresses = await page.evaluate(async () => {
    const names = await caches.keys();
    const kept = await Promise.all(
      names.filter((name) => name.includes('precache')).map(async (name) => (await caches.open(name)).keys()),
    );
    return kept.flat().map((request) => request.url);
  });
  const files = [...new Set(addresses.map((address) => new URL(address).pathname))].filter(
    (file) => !FONT.test(file),
  );
  const sizes = await Promise.all(
    files.map(async (file) => {
      const response = await fetch(`${url}${file}`, { headers: { 'accept-encoding': 'gzip' } });
      return { name: file, bytes: Number(response.headers.get('content-length')) };
    }),
  );
  const [largest] = sizes.sort((a, b) => b.bytes - a.bytes);
  return {
    what: 'All that is precached beside fonts, as sent',
    value: kilobytes(sizes),
    limit: LIMIT_PRECACHED_KB,
    unit: 'kB',
    detail: `${files.length} files, the largest ${nameOf(largest?.name ?? '')}`,
  };
}

async function sizeOf(response: Response): Promise<{ name: string; bytes: number }> {
  const { 'content-length': length, 'content-encoding': encoding } = await response.allHeaders();
  const bytes = encoding === 'gzip' ? Number(length) : gzipSync(await response.body()).length;
  return { name: nameOf(response.url()), bytes };
}

function nameOf(address: string): string {
  return address.split('/').at(-1) ?? address;
}

function kilobytes(sizes: readonly { bytes: number }[]): number {
  return sizes.reduce((sum, { bytes }) => sum + bytes, 0) / 1000;
}
