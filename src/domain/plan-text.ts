/*
 * Names in braces inside the texts of a procedure: `{rod}`, `{fluid.engineOil.quantity}`. What can't be
 * known before the work, such as `{count}` in what a signer says, stays as it stands.
 */
import type { EngineSheet } from './document';

/** What a single step knows of itself. */
export interface StepPlace {
  rod?: number | undefined;
  half?: string | undefined;
  grade?: string | undefined;
  angle?: number | undefined;
  rods?: number[] | undefined;
  minutes?: string | undefined;
  distance?: string | undefined;
}

/** Names that are filled in when the work is done, not when the plan is made. */
export const lateNames: readonly string[] = ['count'];

const braces = /\{([^{}]*)\}/g;

/** The names in braces in a text, in order. */
export function namesIn(text: string): string[] {
  return [...text.matchAll(braces)].map(([, name = '']) => name);
}

/** The text with every name replaced that the engine sheet or the step's place knows. */
export function fillText(text: string, engine: EngineSheet, place: StepPlace): string {
  return text.replace(braces, (whole, name: string) => valueOf(name, engine, place) ?? whole);
}

/** Whether the engine sheet, some step's place or the work itself can fill in the name. */
export function isKnownName(name: string, engine: EngineSheet): boolean {
  const anywhere = { rod: 1, half: 'U', grade: 'g', angle: 0, rods: [1], minutes: '1', distance: '1' };
  return lateNames.includes(name) || valueOf(name, engine, anywhere) !== undefined;
}

function valueOf(name: string, engine: EngineSheet, place: StepPlace): string | undefined {
  const [head = '', key = '', field = ''] = name.split('.');
  if (name.split('.').length > 3) return undefined;
  switch (head) {
    case 'fluid':
      return fieldOf(engine.fluids[key], field, ['title', 'specification', 'quantity', 'unit']);
    case 'figure':
      return fieldOf(engine.figures[key], field, ['title', 'value', 'unit']);
    case 'programme':
      return fieldOf(engine.programmes[key], field, ['title', 'thread']);
    case 'limit':
      return limitField(engine, key, field);
    case 'engine':
      return field === '' ? engineField(engine, key) : undefined;
    default:
      return key === '' ? placeValue(head, place) : undefined;
  }
}

const boltSetWords = { old: 'old bolts', measuring: 'measuring set', new: 'new bolts' } as const;

function engineField(engine: EngineSheet, field: string): string | undefined {
  if (field === 'thread') return engine.card.thread;
  if (field === 'measuringBolts') return boltSetWords[engine.measuringBolts];
  return fieldOf(engine, field, ['name', 'code', 'rotation', 'markColour']);
}

function limitField(engine: EngineSheet, key: string, field: string): string | undefined {
  const limit = engine.limits[key];
  const names = ['title', 'unit', 'low', 'high', 'target', 'uncertainty', 'taper', 'spread'] as const;
  const known = fieldOf(limit, field, names);
  const isFigure = names.some((name) => name === field);
  return known ?? (limit && isFigure ? 'no limit known' : undefined);
}

function fieldOf<K extends string>(
  record: Partial<Record<K, unknown>> | undefined,
  field: string,
  fields: readonly K[],
): string | undefined {
  const name = fields.find((candidate) => candidate === field);
  const value = name === undefined ? undefined : record?.[name];
  return typeof value === 'string' ? value : undefined;
}

function placeValue(name: string, place: StepPlace): string | undefined {
  switch (name) {
    case 'rod':
      return place.rod?.toString();
    case 'half':
      return place.half;
    case 'grade':
      return place.grade;
    case 'angle':
      return place.angle?.toString();
    case 'rods':
      return place.rods && inWords(place.rods);
    case 'minutes':
      return place.minutes;
    case 'distance':
      return place.distance;
    default:
      return undefined;
  }
}

/** `2`, `2 and 5`, `1, 2 and 5`. */
function inWords(numbers: number[]): string {
  const last = numbers.at(-1);
  if (last === undefined) return '';
  return numbers.length === 1 ? `${last}` : `${numbers.slice(0, -1).join(', ')} and ${last}`;
}
