import { readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { parse } from 'yaml';
import { documentSchemas } from './schemas';
import { findShippedFolder, readDocumentFiles } from '@/server/shipped-documents';

describe('the JSON Schemas beside the documents', () => {
  it.each(Object.entries(documentSchemas()))('%s is what the document schema gives today', (file, schema) => {
    const written: unknown = JSON.parse(readFileSync(path.join(findShippedFolder(), file), 'utf8'));
    expect(written, 'run "npm run schemas"').toEqual(schema);
  });

  it('let a field with a default be left out', () => {
    expect(documentSchemas()['engines/engine.schema.json']).toMatchObject({
      required: expect.not.arrayContaining(['capOffset']) as unknown,
    });
  });

  it('are named in the first line of every shipped document', () => {
    for (const { file, text } of readDocumentFiles(findShippedFolder())) {
      const { kind } = parse(text) as { kind: string };
      expect(text.split('\n')[0], file).toBe(`# yaml-language-server: $schema=./${kind}.schema.json`);
    }
  });
});
