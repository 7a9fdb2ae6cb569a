/*
 * A YAML file as written, with the line of each of its nodes, so that whatever is wrong in it can be
 * shown where it stands.
 */
import { isAlias, isMap, isScalar, isSeq, LineCounter, parseDocument, type Document, type Node } from 'yaml';

export interface DocumentFile {
  file: string;
  text: string;
}

/** Something that is wrong in a document: where, what, and what mends it. */
export interface DocumentProblem {
  file: string;
  line: number;
  message: string;
  mend: string;
}

export type NodePath = readonly PropertyKey[];

export interface DocumentSource {
  file: string;
  value: unknown;
  /** The line of the node at this path, or of its nearest ancestor that exists. */
  lineOf: (path: NodePath) => number;
}

/** Reads one YAML file; a source is there only if the file is well-formed. */
export function readSource({ file, text }: DocumentFile): {
  source: DocumentSource | undefined;
  problems: DocumentProblem[];
} {
  const lines = new LineCounter();
  const parsed = parseDocument(text, { lineCounter: lines, prettyErrors: false });
  const problems = [...parsed.errors, ...parsed.warnings].map(({ pos, message }) => ({
    file,
    line: Math.max(1, lines.linePos(pos[0]).line),
    message: `This is not well-formed YAML: ${message.replace(/\.?$/, '.')}`,
    mend: 'Look at indentation, quotation marks and colons on this line and the one before it.',
  }));
  if (problems.length > 0) return { source: undefined, problems };
  try {
    const value: unknown = parsed.toJS({ maxAliasCount: 200 });
    return {
      source: { file, value, lineOf: (path) => lineAt(parsed, lines, path) },
      problems: spelling(file, text),
    };
  } catch (error) {
    const message = error instanceof Error ? error.message : String(error);
    return {
      source: undefined,
      problems: [
        { file, line: 1, message: `This can't be read: ${message}.`, mend: 'Use fewer and simpler aliases.' },
      ],
    };
  }
}

/** Hashed text is NFC; a file in another form would hash otherwise than what is stored. */
function spelling(file: string, text: string): DocumentProblem[] {
  if (text === text.normalize('NFC')) return [];
  const lines = text.split('\n');
  const line = 1 + lines.findIndex((candidate) => candidate !== candidate.normalize('NFC'));
  const message = 'A letter here is written as a letter and a loose accent.';
  return [{ file, line: Math.max(1, line), message, mend: 'Save the file in Unicode form NFC.' }];
}

function lineAt(parsed: Document, lines: LineCounter, path: NodePath): number {
  let node: unknown = parsed.contents;
  let line = 1;
  for (const key of path) {
    const found = childOf(parsed, node, key);
    if (!found) break;
    line = lineOfNode(lines, found.place) ?? line;
    node = found.value;
  }
  return line;
}

function childOf(
  parsed: Document,
  node: unknown,
  key: PropertyKey,
): { place: unknown; value: unknown } | undefined {
  const target = isAlias(node) ? node.resolve(parsed) : node;
  if (isMap(target)) {
    const pair = target.items.find((item) => isScalar(item.key) && String(item.key.value) === String(key));
    return pair && { place: pair.key, value: pair.value };
  }
  if (isSeq(target)) {
    const item = target.items[Number(key)];
    return item === undefined ? undefined : { place: item, value: item };
  }
  return undefined;
}

function lineOfNode(lines: LineCounter, node: unknown): number | undefined {
  const range = (node as Partial<Node> | null)?.range;
  return range ? lines.linePos(range[0]).line : undefined;
}
