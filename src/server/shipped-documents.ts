/*
 * The documents that come with the program, read from the folder `procedures`. They were checked when the
 * program was built; they are checked again here, because the folder can be edited.
 */
import { existsSync, readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { sha256 } from '@noble/hashes/sha2.js';
import { bytesToHex, utf8ToBytes } from '@noble/hashes/utils.js';
import canonicalize from 'canonicalize';
import { checkDocuments, type DocumentProblem } from '@/domain/check-documents';
import type { WorkshopDocument } from '@/domain/document';

/** A checked document with its file, its text as it stands there, and its content hash. */
export interface ShippedDocument {
  file: string;
  text: string;
  document: WorkshopDocument;
  hash: string;
}

/** Shipped documents that don't pass their check; the message lists every problem with its mend. */
export class ShippedDocumentsError extends Error {
  readonly code = 'shipped-documents';
  constructor(readonly problems: DocumentProblem[]) {
    super(
      ['The shipped documents have mistakes, so nothing was loaded.']
        .concat(problems.map(({ file, line, message, mend }) => `${file}:${line}: ${message} ${mend}`))
        .join('\n'),
    );
    this.name = 'ShippedDocumentsError';
  }
}

/** The content hash of a document: SHA-256, in hex, of its RFC 8785 form. */
export function documentHash(document: WorkshopDocument): string {
  const canonical = canonicalize(document);
  if (canonical === undefined) throw new TypeError('A document has a canonical form.');
  return bytesToHex(sha256(utf8ToBytes(canonical)));
}

/** The project's own `procedures` folder, found upwards from this module, built or not. */
export function findShippedFolder(): string {
  let folder = path.dirname(fileURLToPath(import.meta.url));
  while (!existsSync(path.join(folder, 'procedures', 'routes'))) {
    const parent = path.dirname(folder);
    if (parent === folder) throw new Error('The folder "procedures" is missing. Put it beside package.json.');
    folder = parent;
  }
  return path.join(folder, 'procedures');
}

/** The YAML files of a folder and its subfolders, in order of name, with paths relative to it. */
export function readDocumentFiles(folder: string): { file: string; text: string }[] {
  return readdirSync(folder, { recursive: true, encoding: 'utf8' })
    .filter((file) => file.endsWith('.yaml'))
    .sort()
    .map((file) => ({
      file: file.split(path.sep).join('/'),
      text: readFileSync(path.join(folder, file), 'utf8'),
    }));
}

/** Reads and checks the documents of a folder, by default the shipped one. */
export function loadShippedDocuments(folder: string = findShippedFolder()): ShippedDocument[] {
  const files = readDocumentFiles(folder);
  const { problems, documents } = checkDocuments(files);
  if (problems.length > 0) throw new ShippedDocumentsError(problems);
  const texts = new Map(files.map(({ file, text }) => [file, text]));
  return documents.map(({ file, document }) => ({
    file,
    text: texts.get(file) ?? '',
    document,
    hash: documentHash(document),
  }));
}
