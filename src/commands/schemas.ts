/*
 * Writes the JSON Schema of each kind of document beside its YAML, so that an editor helps and checks while
 * one types. A test compares the files with what this would write.
 */
import { writeFileSync } from 'node:fs';
import path from 'node:path';
import { z } from 'zod';
import { engineSchema, procedureSchema, routeSchema } from '@/domain/document';
import { findShippedFolder } from '@/server/shipped-documents';

const schemas = {
  'procedure.schema.json': procedureSchema,
  'engines/engine.schema.json': engineSchema,
  'routes/route.schema.json': routeSchema,
};

/** The JSON Schema of each kind of document, by its file in the folder of the shipped documents. */
export function documentSchemas(): Record<string, object> {
  return Object.fromEntries(
    Object.entries(schemas).map(([file, schema]) => [
      file,
      // What an editor checks is what a person writes: fields with a default may be left out.
      z.toJSONSchema(schema, { io: 'input', target: 'draft-2020-12', reused: 'ref' }),
    ]),
  );
}

/** Writes the JSON Schema files and returns their paths. */
export function writeSchemas(folder: string = findShippedFolder()): string[] {
  return Object.entries(documentSchemas()).map(([file, schema]) => {
    const target = path.join(folder, file);
    writeFileSync(target, `${JSON.stringify(schema, null, 2)}\n`);
    return target;
  });
}
