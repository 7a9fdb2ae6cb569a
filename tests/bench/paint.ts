import { createServer } from 'node:http';
import { once } from 'node:events';
import { readFile } from 'node:fs/promises';
import type { AddressInfo } from 'node:net';
import path from 'node:path';
import type { BrowserContext, Page } from '@playwright/test';
import { TOUCHABLE } from './touchable';
import { each, type Figure, median, ROUNDS, saying } from './report';

const LIMIT = 2;
/** Paints are short, so each round takes the middle of several. */
const REPEATS = 5;

/** The Floor as its worker gives it, against the same page written out as plain HTML and served by a bare server. */
export async function measurePaints(context: BrowserContext, floor: string): Promise<Figure> {
  saying('first paints');
  const server = await serveStatic(await writtenOut(context, floor));
  try {
    const rounds: { bare: number; real: number }[] = [];
    for (let round = 0; round <= ROUNDS; round += 1) {
      const bare = await paints(context, server.url);
      const real = await paints(context, floor);
      // The first round fills the caches of both.
      if (round > 0) rounds.push({ bare, real });
    }
    const ratios = rounds.map(({ bare, real }) => real / bare);
    return {
      what: "The Floor's first paint with no network, against a static page",
      value: median(ratios),
      limit: LIMIT,
      unit: '×',
      detail:
        `Floor ${each(rounds.map(({ real }) => real))} ms, ` +
        `static ${each(rounds.map(({ bare }) => bare))} ms, ratios ${each(ratios, 2)}`,
    };
  } finally {
    server.close();
  }
}

async function paints(context: BrowserContext, address: string): Promise<number> {
  const times: number[] = [];
  for (let time = 0; time < REPEATS; time += 1) times.push(await firstPaint(context, address));
  return median(times);
}

/** When something with content was first painted, counted from the start of loading. */
async function firstPaint(context: BrowserContext, address: string): Promise<number> {
  const page = await context.newPage();
  await page.goto(address);
  const handle = await page.waitForFunction(
    () => performance.getEntriesByName('first-contentful-paint')[0]?.startTime,
  );
  const took = await handle.jsonValue();
  await page.close();
  return took ?? Number.NaN;
}

/** What the Floor shows once it is there, without its scripts, and its style sheets beside it. */
async function writtenOut(
  context: BrowserContext,
  floor: string,
): Promise<{ html: string; styles: Map<string, Buffer> }> {
  const page = await context.newPage();
  await page.goto(floor);
  await page.locator(TOUCHABLE).waitFor();
  const hrefs = await withoutScripts(page);
  const html = await page.content();
  await page.close();
  const styles = new Map<string, Buffer>();
  for (const href of hrefs) styles.set(href, await readFile(path.join('dist', 'client', href)));
  return { html, styles };
}

function withoutScripts(page: Page): Promise<string[]> {
  return page.evaluate(() => {
    const unwanted = 'script, noscript, meta[http-equiv], link:not([rel="stylesheet"])';
    for (const element of document.querySelectorAll(unwanted)) element.remove();
    return [...document.querySelectorAll('link')].map((link) => link.getAttribute('href') ?? '');
  });
}

async function serveStatic({
  html,
  styles,
}: {
  html: string;
  styles: Map<string, Buffer>;
}): Promise<{ url: string; close: () => void }> {
  const server = createServer((request, response) => {
    const style = styles.get(request.url ?? '');
    if (style !== undefined) response.setHeader('content-type', 'text/css').end(style);
    else if (request.url === '/') response.setHeader('content-type', 'text/html').end(html);
    else response.writeHead(404).end();
  });
  server.listen(0, '127.0.0.1');
  await once(server, 'listening');
  const { port } = server.address() as AddressInfo;
  return { url: `http://127.0.0.1:${port}/`, close: () => server.close() };
}
