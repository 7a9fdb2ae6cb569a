import { compilePlan } from '@/domain/compile-plan';
import { hashJson } from '@/domain/canonical';
import type { Plan } from '@/domain/plan';
import { type Actor, requireRole } from './actor';
import { type Asker, requireSomebody } from './asker';
import { type Clock, type Ids, stamp } from './clock';
import { canonicalJson, sha256Hex } from './crypto';
import type { Db, Trx } from './database';
import { AppError, notFound } from './errors';
import { readReleased, releaseShippedIfNone, type ReleasedSet } from './released-documents';

/** A route that a job can be opened with, and what has to be asked for it. */
export interface RouteChoice {
  id: string;
  revision: number;
  name: string;
  engine: { id: string; name: string; code: string };
  options: { id: string; ask: string; choices: { id: string; label: string }[] }[];
}

const KEPT = 50;
const plans = new Map<string, Plan>();

/** A plan by its hash; it never changes, so that a copy is as good as the row. */
export async function getPlan(db: Db, hash: string): Promise<Plan> {
  const held = plans.get(hash);
  if (held !== undefined) return held;
  const body = await findPlanText(db, hash);
  const plan = JSON.parse(body) as Plan;
  if (plans.size >= KEPT) plans.clear();
  plans.set(hash, plan);
  return plan;
}

/**
 * The plan's own text, exactly as it was hashed. It holds the workshop's procedures for a vehicle with these
 * options and nothing of a job or a person, so it is for everybody of the workshop.
 */
export async function getPlanText(db: Db, asker: Asker, hash: string): Promise<string> {
  requireSomebody(asker);
  return findPlanText(db, hash);
}

async function findPlanText(db: Db, hash: string): Promise<string> {
  const row = await db.selectFrom('plan').select('body').where('hash', '=', hash).executeTakeFirst();
  if (row === undefined) throw notFound('This plan');
  return row.body;
}

/** Keeps a plan under its hash, once. */
export async function storePlan(trx: Trx, plan: Plan, clock: Clock): Promise<string> {
  const hash = hashJson(plan, sha256Hex);
  await trx
    .insertInto('plan')
    .values({ hash, body: canonicalJson(plan), created_at: stamp(clock) })
    .onConflict((conflict) => conflict.column('hash').doNothing())
    .execute();
  return hash;
}

/** Every released route, with the options to ask. */
export async function listRoutes(db: Db, actor: Actor): Promise<RouteChoice[]> {
  requireSomebody(actor);
  const released = await readReleased(db);
  return [...released.routes.values()].flatMap(({ document: route }) => {
    const engine = released.engines.get(route.engine)?.document;
    if (engine === undefined) return [];
    const { id, revision, name, options } = route;
    return [{ id, revision, name, engine: { id: engine.id, name: engine.name, code: engine.code }, options }];
  });
}

/** Compiles the plan of a job that is about to be opened, and keeps it. */
export async function preparePlan(
  trx: Trx,
  actor: Actor,
  wanted: { route: string; options: Record<string, string> },
  making: { clock: Clock; ids: Ids },
): Promise<{ hash: string; plan: Plan }> {
  requireRole(actor, 'supervisor', 'owner');
  await releaseShippedIfNone(trx, actor, making);
  const plan = compileReleased(await readReleased(trx), wanted);
  return { hash: await storePlan(trx, plan, making.clock), plan };
}

/** Compiles a route with the revisions that are released now. */
export function compileReleased(
  { engines, procedures, routes }: ReleasedSet,
  { route: routeId, options }: { route: string; options: Record<string, string> },
): Plan {
  const route = routes.get(routeId);
  const engine = route === undefined ? undefined : engines.get(route.document.engine);
  if (route === undefined || engine === undefined) throw notFound('This route');
  const used = route.document.procedures.flatMap((id) => procedures.get(id) ?? []);
  const hashes = Object.fromEntries(
    [route, engine, ...used].map(({ document, hash }) => [document.id, hash]),
  );
  try {
    return compilePlan({
      route: route.document,
      engine: engine.document,
      procedures: used.map(({ document }) => document),
      options,
      hashes,
    });
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    throw new AppError('invalid-field', error.message, { field: 'options', cause: error });
  }
}
