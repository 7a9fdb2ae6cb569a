import * as z from 'zod/mini';

const person = z.object({
  id: z.string(),
  name: z.string(),
  roles: z.array(z.string()),
  active: z.boolean(),
  hasPin: z.boolean(),
  hasSigned: z.boolean(),
  hasPassword: z.boolean(),
  email: z.optional(z.string()),
  certificate: z.nullable(z.object({ number: z.string(), kind: z.string() })),
  authorisedUntil: z.nullable(z.string()),
});
/** A page of the list of everybody, as the page of people shows them. */
export const peopleAnswer = z.object({ people: z.array(person), cursor: z.optional(z.string()) });
export type PersonRow = z.infer<typeof person>;

/** A one-time link as the server answers it. */
export const linkAnswer = z.object({ link: z.string(), expiresAt: z.string() });

/** A link by which somebody sets their password; it is shown once. */
export interface GivenLink {
  name: string;
  link: string;
  expiresAt: string;
}
