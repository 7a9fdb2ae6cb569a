/*
 * Checks documents as a whole before they are released or shipped: each file by itself, then each route
 * with its procedures and its engine sheet, compiled for every combination of its options. Every problem
 * names the file, the line and the mend.
 */
import { checkEngine } from './check-engine';
import { checkPlan } from './check-plan';
import { checkProcedure } from './check-procedure';
import { checkReferences } from './check-references';
import { assemblePlan } from './compile-plan';
import type { EngineSheet, Procedure, Route, WorkshopDocument } from './document';
import { readDocument } from './document-schema';
import {
  readSource,
  type DocumentFile,
  type DocumentProblem,
  type DocumentSource,
  type NodePath,
} from './document-source';

export type { DocumentFile, DocumentProblem } from './document-source';

export interface CheckedDocument {
  file: string;
  document: WorkshopDocument;
}

export interface DocumentCheck {
  /** What must be mended. */
  problems: DocumentProblem[];
  /** What may be meant so. */
  warnings: DocumentProblem[];
  /** Every document that could be read, whatever else is wrong with it. */
  documents: CheckedDocument[];
}

interface ReadDocument<D extends WorkshopDocument = WorkshopDocument> {
  source: DocumentSource;
  document: D;
}

/** More combinations of options than this are not tried. */
const MOST_COMBINATIONS = 256;

/** Checks a set of YAML files: engine sheets, procedures and routes. */
export function checkDocuments(files: DocumentFile[]): DocumentCheck {
  const problems: DocumentProblem[] = [];
  const warnings: DocumentProblem[] = [];
  const read: ReadDocument[] = [];
  for (const file of files) {
    const { source, problems: found } = readSource(file);
    problems.push(...found);
    if (!source) continue;
    const { document, problems: deviations } = readDocument(source);
    problems.push(...deviations);
    if (document) read.push({ source, document });
  }
  const tellIn =
    (list: DocumentProblem[], source: DocumentSource) => (path: NodePath, message: string, mend: string) => {
      list.push({ file: source.file, line: source.lineOf(path), message, mend });
    };
  checkIdsOnce(read, problems);
  for (const { source, document } of read) {
    if (document.kind === 'engine') checkEngine(document, tellIn(problems, source), tellIn(warnings, source));
    if (document.kind === 'procedure') checkProcedure(document, tellIn(problems, source));
    if (document.kind === 'route') checkRouteItself(document, tellIn(problems, source));
  }
  const isSound = problems.length === 0;
  for (const one of read) {
    // What a route misses may be in a file that couldn't be read; that file's own problem says enough.
    if (isRoute(one) && read.length === files.length) checkRoute(one, read, isSound, problems);
  }
  return {
    problems: distinct(problems),
    warnings: distinct(warnings),
    documents: read.map(({ source, document }) => ({ file: source.file, document })),
  };
}

function isRoute(read: ReadDocument): read is ReadDocument<Route> {
  return read.document.kind === 'route';
}

function checkIdsOnce(read: ReadDocument[], problems: DocumentProblem[]): void {
  const first = new Map<string, string>();
  for (const { source, document } of read) {
    const other = first.get(document.id);
    if (other !== undefined) {
      problems.push({
        file: source.file,
        line: source.lineOf(['id']),
        message: `The id "${document.id}" belongs to ${other} already.`,
        mend: 'Give this document an id of its own.',
      });
    }
    first.set(document.id, other ?? source.file);
  }
}

function checkRouteItself(route: Route, tell: (path: NodePath, message: string, mend: string) => void): void {
  const once = (ids: string[], path: NodePath, what: string) =>
    ids.forEach((id, index) => {
      if (ids.indexOf(id) !== index)
        tell([...path, index], `The ${what} "${id}" is there twice.`, 'Keep it once.');
    });
  once(route.procedures, ['procedures'], 'procedure');
  once(
    route.options.map(({ id }) => id),
    ['options'],
    'option',
  );
  once(
    route.holdPoints.map(({ id }) => id),
    ['holdPoints'],
    'hold point',
  );
  route.options.forEach(({ choices }, index) =>
    once(
      choices.map(({ id }) => id),
      ['options', index, 'choices'],
      'choice',
    ),
  );
}

/** A route with everything it needs: references first, and when they hold, every plan it can give. */
function checkRoute(
  route: ReadDocument<Route>,
  read: ReadDocument[],
  isSound: boolean,
  problems: DocumentProblem[],
): void {
  const before = problems.length;
  const tell = (path: NodePath, message: string, mend: string) =>
    problems.push({ file: route.source.file, line: route.source.lineOf(path), message, mend });
  const engine = read.find(
    (one): one is ReadDocument<EngineSheet> =>
      one.document.kind === 'engine' && one.document.id === route.document.engine,
  );
  if (!engine)
    tell(
      ['engine'],
      `There is no engine sheet "${route.document.engine}".`,
      'Correct the id, or add the sheet.',
    );
  const procedures = route.document.procedures.flatMap((id, index) => {
    const found = read.find(
      (one): one is ReadDocument<Procedure> => one.document.kind === 'procedure' && one.document.id === id,
    );
    if (!found)
      tell(['procedures', index], `There is no procedure "${id}".`, 'Correct the id, or add the procedure.');
    return found ? [found] : [];
  });
  if (!engine || problems.length > before) return;
  const parts = {
    route: route.document,
    procedures: procedures.map(({ document }) => document),
    engine: engine.document,
  };
  checkReferences(parts, (procedure, path, message, mend) => {
    const source = procedures.find(({ document }) => document === procedure)?.source ?? route.source;
    problems.push({ file: source.file, line: source.lineOf(path), message, mend });
  });
  if (isSound && problems.length === before) checkPlans({ route, procedures, engine }, problems);
}

interface RouteSources {
  route: ReadDocument<Route>;
  procedures: ReadDocument<Procedure>[];
  engine: ReadDocument<EngineSheet>;
}

function checkPlans({ route, procedures, engine }: RouteSources, problems: DocumentProblem[]): void {
  const tellIn = (source: DocumentSource) => (path: NodePath, message: string, mend: string) => {
    problems.push({ file: source.file, line: source.lineOf(path), message, mend });
  };
  const all = [route, ...procedures, engine];
  const hashes = Object.fromEntries(all.map(({ document }) => [document.id, '0'.repeat(64)]));
  const combinations = combine(route.document.options);
  if (combinations.length > MOST_COMBINATIONS) {
    tellIn(route.source)(
      ['options'],
      `The options make more than ${MOST_COMBINATIONS} different plans.`,
      'Ask fewer options, or split the route.',
    );
    return;
  }
  for (const options of combinations) {
    const input = {
      route: route.document,
      procedures: procedures.map(({ document }) => document),
      engine: engine.document,
      options,
      hashes,
    };
    try {
      const { plan, looseEnds } = assemblePlan(input);
      checkPlan(
        plan,
        looseEnds,
        (stepId, message, mend) => tellStep(procedures, stepId, message, mend, problems),
        tellIn(engine.source),
      );
    } catch (error) {
      if (!(error instanceof RangeError)) throw error;
      tellIn(route.source)([], `The route gives no plan: ${error.message}`, 'Mend what the sentence names.');
    }
  }
}

/** Finds the line of the procedure's step from the id of a step of the plan. */
function tellStep(
  procedures: ReadDocument<Procedure>[],
  stepId: string,
  message: string,
  mend: string,
  problems: DocumentProblem[],
): void {
  const [procedureId = '', name] = (stepId.split('@')[0] ?? '').split('.');
  const found = procedures.find(({ document }) => document.id === procedureId);
  if (!found) return;
  const section = found.document.sections.findIndex(({ steps }) => steps.some(({ id }) => id === name));
  const step = found.document.sections[section]?.steps.findIndex(({ id }) => id === name) ?? 0;
  const line = found.source.lineOf(['sections', section, 'steps', step]);
  problems.push({ file: found.source.file, line, message, mend });
}

/** Every combination of the choices of these options; one more than the most allowed when there are too many. */
export function combine(options: Route['options']): Record<string, string>[] {
  return options.reduce<Record<string, string>[]>(
    (combinations, { id, choices }) =>
      combinations
        .flatMap((chosen) => choices.map((choice) => ({ ...chosen, [id]: choice.id })))
        .slice(0, MOST_COMBINATIONS + 1),
    [{}],
  );
}

/** The same line may be wrong in several plans; it is told once, in the order of files and lines. */
function distinct(problems: DocumentProblem[]): DocumentProblem[] {
  const found = new Map(
    problems.map((problem) => [`${problem.file}:${problem.line}:${problem.message}`, problem]),
  );
  return [...found.values()].sort((a, b) => (a.file === b.file ? a.line - b.line : a.file < b.file ? -1 : 1));
}
