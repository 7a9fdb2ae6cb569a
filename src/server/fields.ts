import * as z from 'zod';
import { ROLES } from '@/domain/role';
import { PASSWORD_MAX, PASSWORD_MIN } from './auth';

/*
 * Fields that several bodies share. Text is brought to NFC here, at the edge, because what is hashed later has
 * to be NFC.
 */

/** Control characters, line ends, half characters, and marks that turn the order of what follows around. */
const UNREADABLE = /[\p{Cc}\p{Surrogate}\u2028\u2029\u202a-\u202e\u2066-\u2069]/u;

/** A line of text as a person types it. */
export function line(max: number) {
  return z
    .string()
    .normalize('NFC')
    .trim()
    .min(1, 'may not be empty')
    .max(max, `may have ${max} characters at most`)
    .refine((text) => !UNREADABLE.test(text), 'has a character in it that cannot be read in a line');
}

export const uuid = z
  .uuid('has to be a UUID in lower case')
  .regex(/^[0-9a-f-]+$/, 'has to be a UUID in lower case');

/** Decimal text as it was read, such as `0.050`. */
export const decimal = z
  .string()
  .regex(/^-?\d{1,9}(\.\d{1,6})?$/, 'has to be a decimal number as text, such as "0.050"');

/** A day, such as 2031-05-06. */
export const day = z.iso.date('has to be a day such as 2031-05-06');

export const personName = line(120);

export const email = z.email('has to be an e-mail address').max(254);

export const password = z
  .string()
  .min(PASSWORD_MIN, `has to have ${PASSWORD_MIN} characters at least`)
  .max(PASSWORD_MAX, `may have ${PASSWORD_MAX} characters at most`);

/** A password that is only compared, so that an old or a wrong one is answered as wrong. */
export const givenPassword = z
  .string()
  .min(1, 'may not be empty')
  .max(PASSWORD_MAX, 'is longer than any password here');

export const pin = z.string().regex(/^\d{6}$/, 'has to be six digits');

export const role = z.enum(ROLES);

export const roles = z
  .array(role)
  .min(1, 'has to name one role at least')
  .refine((list) => new Set(list).size === list.length, 'names a role twice');

/** The secret of a one-time link or of a tablet. */
export const secret = z.string().regex(/^[\w-]{43}$/, 'is not whole; use the link as it was given');

/** Where the next page of a list begins, as the last one said. */
export const cursor = z.string().max(3000, 'is longer than any page’s').optional();

/** The answer of something that has nothing more to say. */
export const nothing = z.strictObject({ ok: z.literal(true) });

/** A time zone that this server knows. */
export const zone = line(60).refine(isZone, 'has to be a time zone such as Europe/London');

function isZone(name: string): boolean {
  try {
    new Intl.DateTimeFormat('en-GB', { timeZone: name });
    return true;
  } catch (error) {
    if (error instanceof RangeError) return false;
    throw error;
  }
}
