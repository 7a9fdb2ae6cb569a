import * as z from 'zod/mini';

/** What a form is told: that it was done, or in words why not and at which field. */
export type FormOutcome<T> =
  { ok: true; answer: T } | { ok: false; message: string; field?: string | undefined };

const refusal = z.object({ error: z.object({ message: z.string(), field: z.optional(z.string()) }) });

/** Sends a form as JSON; a network that is away is an answer too, and nothing typed is lost by it. */
export async function postForm<S extends z.ZodMiniType>(
  path: string,
  body: unknown,
  schema: S,
): Promise<FormOutcome<z.output<S>>> {
  let response: Response;
  let answer: unknown;
  try {
    response = await fetch(path, {
      method: 'POST',
      headers: { 'content-type': 'application/json', accept: 'application/json' },
      body: JSON.stringify(body),
    });
    answer = await response.json();
  } catch {
    // fetch throws for every failure of the network, and a portal's page is not JSON.
    return { ok: false, message: 'The server was not reached. What you typed is still here: try again.' };
  }
  const done = response.ok ? z.safeParse(schema, answer) : undefined;
  if (done?.success) return { ok: true, answer: done.data };
  const told = z.safeParse(refusal, answer);
  if (told.success) return { ok: false, ...told.data.error };
  return { ok: false, message: 'The server could not do it. What you typed is still here: try again.' };
}
