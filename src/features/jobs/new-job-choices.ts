import * as z from 'zod/mini';

/** The routes that a job can be opened with. */
export const routesAnswer = z.object({
  routes: z.array(
    z.object({
      id: z.string(),
      name: z.string(),
      engine: z.object({ name: z.string(), code: z.string() }),
      options: z.array(
        z.object({
          id: z.string(),
          ask: z.string(),
          choices: z.array(z.object({ id: z.string(), label: z.string() })),
        }),
      ),
    }),
  ),
});
export type RouteChoice = z.infer<typeof routesAnswer>['routes'][number];

/** Who can be put on a job. */
export const peopleAnswer = z.object({
  people: z.array(
    z.object({ id: z.string(), name: z.string(), roles: z.array(z.string()), active: z.boolean() }),
  ),
});
export type PersonChoice = z.infer<typeof peopleAnswer>['people'][number];
