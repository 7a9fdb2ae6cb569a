import * as z from 'zod';
import { ROLES, type Role } from '@/domain/role';
import { AppError } from './errors';

/** The person on whose behalf something is asked; every query function takes one. */
export interface Actor {
  personId: string;
  name: string;
  roles: readonly Role[];
  /** The session that proves it; none for a person who acts through a one-time link. */
  sessionId: string | undefined;
}

/** The server itself, for what it notes of its own accord; it has no roles and may ask for nothing. */
export const THE_WORKSHOP: Actor = {
  personId: 'workshop',
  name: 'Workshop',
  roles: [],
  sessionId: undefined,
};

const rolesText = z.array(z.enum(ROLES)).min(1);

/** Reads the roles of a person as the database holds them. */
export function parseRoles(text: string): Role[] {
  return rolesText.parse(JSON.parse(text));
}

/** The roles among these words that the workshop knows. */
export function parseKnownRoles(words: readonly string[]): Role[] {
  return ROLES.filter((role) => words.includes(role));
}

/** Whether the person has one of these roles. */
export function hasRole(actor: Actor, ...roles: readonly Role[]): boolean {
  return roles.some((role) => actor.roles.includes(role));
}

/** Lets only people with one of these roles go on. */
export function requireRole(actor: Actor, ...roles: readonly Role[]): void {
  if (hasRole(actor, ...roles)) return;
  throw new AppError(
    'not-allowed',
    `This is for the ${listWords(roles)}. You are signed in as ${actor.name} (${actor.roles.join(', ')}). Ask one of them, or let them sign in here.`,
  );
}

function listWords(words: readonly string[]): string {
  if (words.length < 2) return words.join('');
  return `${words.slice(0, -1).join(', ')} or ${words.at(-1) ?? ''}`;
}
