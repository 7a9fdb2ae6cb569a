import * as z from 'zod';
import { email, nothing } from '@/server/fields';
import { findWitnessAddress, sendTrialLetter, setWitnessAddress } from '@/server/head-mail';
import { endpoint } from '@/server/http';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/workshop/witness',
    summary: 'Where signed heads are mailed to',
    who: ['owner'],
    answer: z.strictObject({ address: z.string().nullable() }),
  },
  async ({ app, actor }) => ({ address: (await findWitnessAddress(app.db, actor)) ?? null }),
);

export const PUT = endpoint(
  {
    method: 'PUT',
    path: '/api/workshop/witness',
    summary: 'Choose where signed heads are mailed to, or nowhere',
    who: ['owner'],
    body: z.strictObject({ address: email.nullable() }),
    answer: nothing,
  },
  async ({ app, actor, body }) => {
    await app.db.transaction().execute((trx) => setWitnessAddress(trx, actor, body.address, app));
    return { ok: true as const };
  },
);

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/workshop/witness',
    summary: 'Send a trial letter to the witness address',
    who: ['owner'],
    body: z.strictObject({}),
    answer: nothing,
    status: 202,
  },
  async ({ app, actor }) => {
    await app.db.transaction().execute((trx) => sendTrialLetter(trx, actor, app));
    return { ok: true as const };
  },
);
