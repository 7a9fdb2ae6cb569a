import {
  documentSchema,
  type EngineSheet,
  type Procedure,
  type Route,
  type WorkshopDocument,
} from '@/domain/document';
import { type Actor, requireRole } from './actor';
import { type Clock, type Ids, stamp } from './clock';
import type { Db, Trx } from './database';
import { loadShippedDocuments } from './shipped-documents';
import { appendWorkshopEntry } from './workshop-trail';

export interface Released<D extends WorkshopDocument> {
  document: D;
  hash: string;
}

/** The newest released revision of every document, by the document's id. */
export interface ReleasedSet {
  engines: ReadonlyMap<string, Released<EngineSheet>>;
  procedures: ReadonlyMap<string, Released<Procedure>>;
  routes: ReadonlyMap<string, Released<Route>>;
}

/** A document as it is released: its text as people wrote it, and what it says. */
export interface DocumentText {
  document: WorkshopDocument;
  text: string;
  hash: string;
}

/** What jobs are opened with: the workshop's released documents, or the shipped ones until it has its own. */
export async function readReleased(db: Db): Promise<ReleasedSet> {
  const rows = await db
    .selectFrom('document_revision')
    .select(['body', 'hash'])
    .where('state', '=', 'released')
    .orderBy('revision')
    .execute();
  const documents =
    rows.length > 0
      ? rows.map(({ body, hash }) => ({ document: documentSchema.parse(JSON.parse(body)), hash }))
      : shippedDocuments();
  return sortOut(documents);
}

let shipped: ReturnType<typeof loadShippedDocuments> | undefined;

/** The documents that came with the program, read once. */
export function shippedDocuments(): ReturnType<typeof loadShippedDocuments> {
  shipped ??= loadShippedDocuments();
  return shipped;
}

/** Puts the newest revision of each document under its id; later ones in the list replace earlier ones. */
export function sortOut(documents: readonly Released<WorkshopDocument>[]): ReleasedSet {
  const engines = new Map<string, Released<EngineSheet>>();
  const procedures = new Map<string, Released<Procedure>>();
  const routes = new Map<string, Released<Route>>();
  for (const { document, hash } of documents) {
    if (document.kind === 'engine') engines.set(document.id, { document, hash });
    else if (document.kind === 'procedure') procedures.set(document.id, { document, hash });
    else routes.set(document.id, { document, hash });
  }
  return { engines, procedures, routes };
}

/** A workshop that has no documents of its own yet takes the shipped ones, so that every plan names what is kept. */
export async function releaseShippedIfNone(
  trx: Trx,
  actor: Actor,
  making: { clock: Clock; ids: Ids },
): Promise<void> {
  const any = await trx.selectFrom('document_revision').select('id').limit(1).executeTakeFirst();
  if (any === undefined) await releaseDocuments(trx, actor, shippedDocuments(), making);
}

/** Takes documents into the workshop as released revisions; those it has already are left alone. */
export async function releaseDocuments(
  trx: Trx,
  actor: Actor,
  documents: readonly DocumentText[],
  making: { clock: Clock; ids: Ids },
): Promise<void> {
  requireRole(actor, 'supervisor', 'quality lead', 'owner');
  const at = stamp(making.clock);
  for (const { document, text, hash } of documents) {
    const { kind, id, revision } = document;
    const known = await trx
      .selectFrom('document_revision')
      .select('hash')
      .where('kind', '=', kind)
      .where('id', '=', id)
      .where('revision', '=', revision)
      .executeTakeFirst();
    if (known !== undefined) continue;
    await trx
      .insertInto('document_revision')
      .values({
        kind,
        id,
        revision,
        hash,
        text,
        body: JSON.stringify(document),
        state: 'released',
        written_by: actor.personId,
        written_at: at,
        released_by: actor.personId,
        released_at: at,
        withdrawn_by: null,
        withdrawn_at: null,
      })
      .execute();
    const data = { document: id, documentKind: kind, revision, hash, from: 'shipped with the program' };
    await appendWorkshopEntry(trx, actor, { kind: 'document-released', data }, making);
  }
}
