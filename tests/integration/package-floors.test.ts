import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

/*
 * The versions below which a package that guards something must not fall. An advisory for a package raises its
 * floor here in the same change that updates it.
 */
const FLOORS: Readonly<Record<string, string>> = {
  '@astrojs/node': '9.5.5',
  '@hpke/core': '1.9.0',
  '@noble/hashes': '2.4.0',
  astro: '5.18.2',
  'better-auth': '1.7.25',
  'better-sqlite3': '12.11.1',
  canonicalize: '4.0.0',
  esbuild: '0.27.7',
  kysely: '0.28.19',
  pino: '10.4.0',
  react: '19.3.1',
  'react-dom': '19.3.1',
  sharp: '0.34.5',
  uuid: '14.0.3',
  vite: '6.4.6',
  yaml: '2.9.1',
  zod: '4.6.7',
};

/** Older copies inside packages that were tested with them; both run at build time only, on our own files. */
const ACCEPTED_COPIES = new Set([
  'node_modules/astro/node_modules/zod@3.25.76',
  'node_modules/vite/node_modules/esbuild@0.25.12',
]);

interface Lock {
  packages: Record<
    string,
    { version?: string; resolved?: string; dev?: boolean; inBundle?: boolean; integrity?: string }
  >;
}

const lock = JSON.parse(readFileSync('package-lock.json', 'utf8')) as Lock;
const manifest = JSON.parse(readFileSync('package.json', 'utf8')) as Record<
  'dependencies' | 'devDependencies',
  Record<string, string>
>;

/** Whether a version is the floor or above it, and of the same major, whose API we were tested with. */
function isAtLeast(version: string, floor: string): boolean {
  const [actual, wanted] = [version, floor].map((text) => text.split('.').map(Number)) as [
    number[],
    number[],
  ];
  if (actual.length !== 3 || actual.some(Number.isNaN)) return false;
  const differing = actual.findIndex((part, index) => part !== wanted[index]);
  return differing === -1 || (differing > 0 && actual[differing]! > wanted[differing]!);
}

describe('the packages that guard something', () => {
  it.each(Object.entries(FLOORS))('holds %s at %s or above, wherever it is installed', (name, floor) => {
    const copies = Object.entries(lock.packages).filter(
      ([path, entry]) =>
        path === `node_modules/${name}` || (path.endsWith(`/node_modules/${name}`) && entry.dev !== true),
    );
    expect(copies).not.toEqual([]);
    for (const [path, { version = '' }] of copies) {
      const isAccepted = isAtLeast(version, floor) || ACCEPTED_COPIES.has(`${path}@${version}`);
      expect(isAccepted, `${path} is ${version}, below ${floor}`).toBe(true);
    }
  });

  it('compares versions by number', () => {
    expect(isAtLeast('1.10.0', '1.9.9')).toBe(true);
    expect(isAtLeast('1.9.9', '1.10.0')).toBe(false);
    expect(isAtLeast('1.9.9', '1.9.9')).toBe(true);
    expect(isAtLeast('2.0.0', '1.9.9')).toBe(false);
    expect(isAtLeast('1.9.9-rc.1', '1.9.9')).toBe(false);
  });
});

describe('the lock file', () => {
  it('names every package by an exact version in package.json', () => {
    const versions = Object.values({ ...manifest.dependencies, ...manifest.devDependencies });
    expect(versions.filter((version) => !/^\d+\.\d+\.\d+$/.test(version))).toEqual([]);
  });

  it('names no host, so that it installs through any mirror', () => {
    expect(Object.values(lock.packages).filter(({ resolved }) => resolved !== undefined)).toEqual([]);
  });

  it('holds the hash of every package', () => {
    // A bundled package came inside another, whose hash covers it.
    const unhashed = Object.entries(lock.packages).filter(
      ([path, { integrity, inBundle }]) => path !== '' && inBundle !== true && integrity === undefined,
    );
    expect(unhashed.map(([path]) => path)).toEqual([]);
  });
});
