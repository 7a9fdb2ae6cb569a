/*
 * What the schema says against a document, in plain words: the field by the names of its steps and
 * sections, what is wrong with it, and what to write instead.
 */
import type { z } from 'zod';
import { documentSchema, type WorkshopDocument } from './document';
import type { DocumentProblem, DocumentSource, NodePath } from './document-source';

type Issue = z.core.$ZodIssue;
interface Words {
  path: NodePath;
  message: string;
  mend: string;
}

/** Reads a well-formed file as a document; every deviation from the schema becomes a problem. */
export function readDocument(source: DocumentSource): {
  document: WorkshopDocument | undefined;
  problems: DocumentProblem[];
} {
  const result = documentSchema.safeParse(source.value);
  if (result.success) return { document: result.data, problems: [] };
  const problems = result.error.issues
    .flatMap((issue) => wordsFor(issue, source.value))
    .map(({ path, message, mend }) => ({ file: source.file, line: source.lineOf(path), message, mend }));
  return { document: undefined, problems };
}

function wordsFor(issue: Issue, root: unknown): Words[] {
  const { path } = issue;
  const field = fieldName(root, path);
  const value = valueAt(root, path);
  switch (issue.code) {
    case 'unrecognized_keys':
      return issue.keys.map((key) => ({
        path: [...path, key],
        message: `${fieldName(root, [...path, key])} is not a field that belongs here.`,
        mend: 'Correct its spelling, or take it out.',
      }));
    case 'invalid_type':
      return [
        value === undefined
          ? { path, message: `${field} is missing.`, mend: `Add it: ${typeWords(issue.expected)}.` }
          : {
              path,
              message: `${field} must be ${typeWords(issue.expected)}.`,
              mend: typeMend(issue.expected, value),
            },
      ];
    case 'invalid_format':
      return [{ path, message: `${field} can't be ${shown(value)}.`, mend: `Write ${issue.message}.` }];
    case 'invalid_value': {
      const choices = issue.values.map(String).join(', ');
      const message = value === undefined ? `${field} is missing.` : `${field} can't be ${shown(value)}.`;
      return [{ path, message, mend: `Write one of: ${choices}.` }];
    }
    case 'too_small':
      return [tooSmall(issue.origin, issue.minimum, path, field)];
    case 'too_big':
      return [{ path, message: `${field} is too large.`, mend: `Write ${issue.maximum} or less.` }];
    case 'invalid_union':
      return [unionWords(issue, path, field, value)];
    case 'invalid_key':
      return [
        {
          path,
          message: `${field} is not a name that can be used here.`,
          mend: `Write ${issue.issues[0]?.message ?? 'another name'}.`,
        },
      ];
    default:
      return [{ path, message: `${field}: ${issue.message}.`, mend: 'Correct it.' }];
  }
}

function tooSmall(origin: string, minimum: number | bigint, path: NodePath, field: string): Words {
  if (origin === 'string')
    return { path, message: `${field} is empty.`, mend: 'Write something, or take the field out.' };
  if (origin === 'array') {
    return { path, message: `${field} has too few entries.`, mend: `Give at least ${minimum}.` };
  }
  return { path, message: `${field} is too small.`, mend: `Write ${minimum} or more.` };
}

function unionWords(
  issue: z.core.$ZodIssueInvalidUnion,
  path: NodePath,
  field: string,
  value: unknown,
): Words {
  if (issue.discriminator === undefined) {
    const mend = 'Write one word, or a list of words.';
    return { path, message: `${field} is not one of the forms that it may have.`, mend };
  }
  const options: unknown = 'options' in issue ? issue.options : [];
  const choices = Array.isArray(options) ? options.join(', ') : '';
  const message = value === undefined ? `${field} is missing.` : `${field} can't be ${shown(value)}.`;
  return { path, message, mend: `Write one of: ${choices}.` };
}

function typeWords(expected: string): string {
  const words: Record<string, string> = {
    string: 'text',
    number: 'a whole number',
    int: 'a whole number',
    array: 'a list',
    object: 'a group of fields',
    record: 'a group of names',
    boolean: 'true or false',
  };
  return words[expected] ?? expected;
}

function typeMend(expected: string, value: unknown): string {
  if (expected === 'string' && (typeof value === 'number' || typeof value === 'boolean')) {
    return `Put it in quotation marks: "${value}".`;
  }
  return `Write ${typeWords(expected)}.`;
}

function shown(value: unknown): string {
  return typeof value === 'string' ? `"${value}"` : JSON.stringify(value);
}

function valueAt(root: unknown, path: NodePath): unknown {
  return path.reduce<unknown>(
    (value, key) => (typeof value === 'object' && value !== null ? Reflect.get(value, key) : undefined),
    root,
  );
}

/** `"title" of "cap-off" of "rods"`: list entries by their own id or place, so that a person finds them. */
export function fieldName(root: unknown, path: NodePath): string {
  const names: string[] = [];
  for (let length = 1; length <= path.length; length++) {
    const key = path[length - 1];
    if (typeof key !== 'number') {
      names.push(String(key));
      continue;
    }
    const entry = valueAt(root, path.slice(0, length));
    const id: unknown = typeof entry === 'object' && entry !== null ? Reflect.get(entry, 'id') : undefined;
    // The list's own name says nothing once its entry has one.
    if (typeof id === 'string') names[names.length - 1] = id;
    else names[names.length - 1] = `${names.at(-1) ?? 'entry'} ${key + 1}`;
  }
  if (names.length === 0) return 'The document';
  return names
    .map((name) => `"${name}"`)
    .reverse()
    .join(' of ');
}
