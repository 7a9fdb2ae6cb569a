import * as z from 'zod';
import { email, line, nothing, password, personName, secret, zone } from '@/server/fields';
import { endpoint } from '@/server/http';
import { makeFirstOwner } from '@/server/one-time-links';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/first-owner',
    summary: 'Make the first owner and name the workshop, through the link that was printed at the start',
    who: 'anyone',
    body: z.strictObject({
      token: secret,
      name: personName,
      email,
      password,
      workshop: z.strictObject({ name: line(120), zone }),
    }),
    answer: nothing,
    status: 201,
  },
  async ({ app, body }) => {
    await makeFirstOwner(app, body);
    return { ok: true as const };
  },
);
