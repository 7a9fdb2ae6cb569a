import { compilePlan } from '@/domain/compile-plan';
import type { EngineSheet, Procedure, Route } from '@/domain/document';
import type { Plan } from '@/domain/plan';
import { loadShippedDocuments, type ShippedDocument } from '@/server/shipped-documents';

export type ShippedRoute = 'merrow-s6-rod-bearings' | 'corvane-v8-rod-bearings';

/** The plainest vehicle: electric steering, front axle not driven, no plate. */
export const plainOptions: Record<string, string> = {
  steering: 'electric',
  'front-axle': 'not-driven',
  plate: 'none',
};

let shipped: ShippedDocument[] | undefined;

/** A shipped route compiled for the plainest vehicle, or for other options. */
export function shippedPlan(routeId: ShippedRoute, options: Record<string, string> = {}): Plan {
  shipped ??= loadShippedDocuments();
  const documents = shipped.map(({ document }) => document);
  const route = documents.find((one): one is Route => one.kind === 'route' && one.id === routeId);
  const engine = documents.find(
    (one): one is EngineSheet => one.kind === 'engine' && one.id === route?.engine,
  );
  if (!route || !engine) throw new Error(`There is no shipped route "${routeId}".`);
  return compilePlan({
    route,
    engine,
    procedures: documents.filter((one): one is Procedure => one.kind === 'procedure'),
    options: { ...plainOptions, ...options },
    hashes: Object.fromEntries(shipped.map(({ document, hash }) => [document.id, hash])),
  });
}
