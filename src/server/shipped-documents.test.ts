import { cpSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createHash } from 'node:crypto';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, describe, expect, it } from 'vitest';
import {
  documentHash,
  findShippedFolder,
  loadShippedDocuments,
  ShippedDocumentsError,
} from './shipped-documents';
import { shippedPlan } from '../../tests/support/shipped-plan';

const folders: string[] = [];
afterEach(() => folders.splice(0).forEach((folder) => rmSync(folder, { recursive: true })));

function copyOfShipped(): string {
  const folder = mkdtempSync(path.join(tmpdir(), 'procedures-'));
  folders.push(folder);
  cpSync(findShippedFolder(), folder, { recursive: true });
  return folder;
}

describe('the shipped documents', () => {
  it('are found whatever folder the program was started in', () => {
    const before = process.cwd();
    process.chdir(tmpdir());
    try {
      expect(loadShippedDocuments().map(({ file }) => file)).toContain('engines/merrow-s6.yaml');
    } finally {
      process.chdir(before);
    }
  });

  it('come with their text and the SHA-256 of their canonical form', () => {
    const [first] = loadShippedDocuments();
    expect(first!.text).toBe(readFileSync(path.join(findShippedFolder(), first!.file), 'utf8'));
    expect(first!.hash).toMatch(/^[0-9a-f]{64}$/);
    expect(documentHash(first!.document)).toBe(first!.hash);
  });

  it('are hashed over sorted keys, without spaces', () => {
    const route = loadShippedDocuments().find(({ document }) => document.kind === 'route')!.document;
    const sorted = (value: unknown): unknown => {
      if (Array.isArray(value)) return value.map(sorted);
      if (typeof value !== 'object' || value === null) return value;
      return Object.fromEntries(
        Object.entries(value)
          .sort(([a], [b]) => (a < b ? -1 : 1))
          .map(([key, one]) => [key, sorted(one)]),
      );
    };
    const expected = createHash('sha256')
      .update(JSON.stringify(sorted(route)))
      .digest('hex');
    expect(documentHash(route)).toBe(expected);
  });

  it('change their hash with every change of a word and with none of a comment', () => {
    const folder = copyOfShipped();
    const before = new Map(loadShippedDocuments(folder).map(({ file, hash }) => [file, hash]));
    const file = path.join(folder, 'measurement.yaml');
    writeFileSync(file, `# A comment.\n${readFileSync(file, 'utf8')}`);
    const engine = path.join(folder, 'engines', 'merrow-s6.yaml');
    writeFileSync(engine, readFileSync(engine, 'utf8').replace('Page', 'page').replace('yellow', 'orange'));
    const after = new Map(loadShippedDocuments(folder).map((one) => [one.file, one.hash]));
    expect(after.get('measurement.yaml')).toBe(before.get('measurement.yaml'));
    expect(after.get('engines/merrow-s6.yaml')).not.toBe(before.get('engines/merrow-s6.yaml'));
  });

  it('are not loaded when one of them is wrong, and the error says where and how to mend it', () => {
    const folder = copyOfShipped();
    const file = path.join(folder, 'routes', 'merrow-s6-rod-bearings.yaml');
    writeFileSync(file, readFileSync(file, 'utf8').replace('engine: merrow-s6', 'engine: merrow-s7'));
    expect(() => loadShippedDocuments(folder)).toThrow(ShippedDocumentsError);
    expect(() => loadShippedDocuments(folder)).toThrow(
      'routes/merrow-s6-rod-bearings.yaml:6: There is no engine sheet "merrow-s7". Correct the id, or add the sheet.',
    );
  });

  it('compile for the plainest vehicle and for every option', () => {
    const plain = shippedPlan('merrow-s6-rod-bearings');
    const plate = shippedPlan('merrow-s6-rod-bearings', { plate: 'fitted' });
    expect(plain.steps.some(({ id }) => id === 'reassembly.plate-on')).toBe(false);
    expect(plate.steps.some(({ id }) => id === 'reassembly.plate-on')).toBe(true);
  });
});
